import type { Steps } from '../algebra/pauli/types.ts';
import type { CellKind, Offset } from '../lattice/cells.ts';
import { labelsOf, type TypesetContext } from './context.ts';

/** Over which cells a sum or a product runs: classes, pinned coordinates, residues. */

/** A label of a class: numbers and single capitals as they stand, words upright. */
export const labelTex = (label: string): string => (/^[\dA-Z]$/.test(label) ? label : `\\mathrm{${label}}`);

/** The offset with translated coordinates reduced to their residue. */
export const residueOf = (offset: Offset, steps: Steps): number[] =>
  offset.map((c, d) => (steps[d] ? ((c % steps[d]) + steps[d]) % steps[d] : c));

export const uniqueOffsets = (offsets: readonly Offset[]): Offset[] => [
  ...new Map(offsets.map((o) => [o.join(','), o])).values(),
];

/** `\in 1`, `\in \{1,3\}`, `\in \mathrm{triangle}`; empty where all of the kind's `domain` classes take part. */
export function classesTex(
  context: TypesetContext,
  kind: CellKind,
  indices: readonly number[],
  domain: number,
): string {
  if (indices.length >= domain) return '';
  const labels = labelsOf(context.family, kind, indices).map(labelTex);
  return `\\in ${labels.length === 1 ? (labels[0] ?? '') : `\\{${labels.join(',')}\\}`}`;
}

const axis = (letter: string, d: number, dimension: number): string =>
  dimension === 1 ? letter : `${letter}_{${String(d + 1)}}`;

/** Conditions on a cell's coordinates, empty where it runs everywhere: `v_{1}=0`, `v\equiv 1\,(2)`, `v\equiv (0,0),(1,1)\;(2,2)`. */
export function conditionsTex(letter: string, steps: Steps, residues: readonly Offset[]): string {
  const n = steps.length;
  if (steps.every((m) => m === 1)) return '';
  const [one, ...more] = residues;
  if (one && more.length === 0)
    return steps
      .flatMap((m, d) => {
        const name = axis(letter, d, n);
        const at = String(one[d] ?? 0);
        return m === 1 ? [] : m === 0 ? [`${name}=${at}`] : [`${name}\\equiv ${at}\\,(${String(m)})`];
      })
      .join(',\\,');
  const list = residues.map((r) => (n === 1 ? String(r[0] ?? 0) : `(${r.join(',')})`)).join(',');
  return `${letter}\\equiv ${list}\\;(${steps.map(String).join(',')})`;
}

/** The same for the ear, with a leading space. */
export function conditionsSpoken(steps: Steps, residues: readonly Offset[]): string {
  if (steps.every((m) => m === 1)) return '';
  const one = (r: Offset): string =>
    steps
      .flatMap((m, d) => {
        const name = steps.length === 1 ? 'the position' : `coordinate ${String(d + 1)}`;
        const at = String(r[d] ?? 0);
        return m === 1 ? [] : [`${name} is ${at}${m === 0 ? '' : ` modulo ${String(m)}`}`];
      })
      .join(' and ');
  return ` where ${residues.map(one).join(', or ')}`;
}
