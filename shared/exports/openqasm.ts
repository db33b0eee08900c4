import type { ClusterCircuit } from '../contracts/exchange.ts';

/**
 * A circuit on a finite cluster. Source: A. Cross and others, "OpenQASM 3: A Broader and Deeper Quantum Assembly Language", ACM Trans.
 * Quantum Comput. 3, 12 (2022); the gates are those of its stdgates.inc.
 */
export function openQasm({ name, cluster, sites, gates }: ClusterCircuit): string {
  return [
    'OPENQASM 3.0;',
    'include "stdgates.inc";',
    `// circuit ${name}, ${cluster}`,
    ...sites.map((what, site) => `// q[${String(site)}] is ${what}`),
    `qubit[${String(sites.length)}] q;`,
    ...gates.map(({ gate, sites: on }) => `${gate} ${on.map((site) => `q[${String(site)}]`).join(', ')};`),
    '',
  ].join('\n');
}
