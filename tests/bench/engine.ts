import { newDerivation } from '../../shared/derivation/derive.ts';

/**
 * How long the engine takes from a text of 300 lines to its first report: parsed, checked, evaluated and set in type, with all
 * that is symbolic decided. Goal: 50 ms once warm, when one key has changed the text.
 */

const head = `lattice kagome torus 3 x 3
spins s on vertices
spins g on links
couplings J = 1, h = 0.6, K = 0.2

symmetry flip = prod(v: vertices) s^x[v]
law G(v: vertices) = s^x[v] prod(l: star(v)) g^x[l]
law flat(p: plaquettes.hexagon) = prod(l: rim(p)) g^z[l]
map N = gauge flip with g on links
`;

const step = (k: number, by: string): string => `
# step ${String(k)}
operator B${String(k)}(p: plaquettes) = prod(l: rim(p)) g^z[l]
operator C${String(k)}(v: vertices) = prod(u: neighbours(v)) s^z[u]
model ising${String(k)} =
  - J sum(l: links) s^z[l.a] s^z[l.b]
  - ${by} h sum(v: vertices) s^x[v]
  - ${String(k + 1)} K sum(p: pairs(2)) s^z[p.a] s^z[p.b]
  + K sum(v: vertices where v.x % 3 == ${String(k % 3)}) s^x[v]
model higgs${String(k)} =
  N(ising${String(k)})
  - K sum(p: plaquettes.triangle) B${String(k)}(p)
  - h sum(l: links) g^x[l]
audit commute higgs${String(k)} with N.gauss
`;

export const source = (by: string): string =>
  `${head}${Array.from({ length: 21 }, (_, k) => step(k, k === 10 ? by : '1')).join('')}`;

export interface EngineFigures {
  readonly lines: number;
  /** Milliseconds, medians: after one change to a text that was read before; a text read for the first time. */
  readonly changed: number;
  readonly whole: number;
}

/** First report of a text, in milliseconds. */
function firstReport(derivation: ReturnType<typeof newDerivation>, text: string): number {
  const start = performance.now();
  const run = derivation.run(text);
  for (;;) {
    const step = run.next();
    if (step.done || step.value.kind === 'report') break;
  }
  return performance.now() - start;
}

const median = (times: readonly number[]): number => [...times].sort((a, b) => a - b)[times.length >> 1] ?? NaN;

export function measureEngine(runs = 24): EngineFigures {
  const derivation = newDerivation();
  for (let k = 0; k < 8; k += 1) firstReport(newDerivation(), source(String(k)));
  firstReport(derivation, source('0'));
  const changed = Array.from({ length: runs }, (_, k) => firstReport(derivation, source(String(k + 2))));
  const whole = Array.from({ length: runs }, (_, k) => firstReport(newDerivation(), source(String(k + 2))));
  return { lines: source('1').split('\n').length, changed: median(changed), whole: median(whole) };
}
