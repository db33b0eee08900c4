import type { ClusterModel } from '../contracts/exchange.ts';

/** A matrix of more spins would have more entries than a file is good for. */
export const mostMatrixSites = 14;

/**
 * A model on a finite cluster as a sparse matrix in coordinate form. Source: R. F. Boisvert, R. Pozo, K. A. Remington, "The Matrix Market
 * Exchange Formats: Initial Design", NISTIR 5935 (1996). Site 0 is the highest bit of the index, as in a Kronecker product from left to
 * right; |0> is Z = +1. Only the lower triangle is written: real models are `symmetric`, others `hermitian`.
 * Returns a sentence where the matrix would be too large.
 */
export function matrixMarket(model: ClusterModel): { readonly text: string } | { readonly fault: string } {
  const n = model.sites.length;
  if (n > mostMatrixSites) {
    return {
      fault: `A matrix is written for at most ${String(mostMatrixSites)} spins; this cluster has ${String(n)}.`,
    };
  }
  const size = 2 ** n;
  const columns = entriesOf(model, n, size);
  const lines: string[] = [];
  const complex = columns.some((column) => [...column.values()].some(([, im]) => im !== 0));
  columns.forEach((column, j) => {
    for (const [i, [re, im]] of [...column].sort((a, b) => a[0] - b[0])) {
      if (re === 0 && im === 0) continue;
      lines.push(`${String(i + 1)} ${String(j + 1)} ${String(re)}${complex ? ` ${String(im)}` : ''}`);
    }
  });
  const head = [
    `%%MatrixMarket matrix coordinate ${complex ? 'complex hermitian' : 'real symmetric'}`,
    `% model ${model.name}, ${model.cluster}; |0> is Z = +1, site 0 the highest bit`,
    ...model.sites.map((what, site) => `% site ${String(site)} ${what}`),
    `${String(size)} ${String(size)} ${String(lines.length)}`,
  ];
  return { text: `${[...head, ...lines].join('\n')}\n` };
}

type Column = Map<number, [re: number, im: number]>;

/** Entries on and below the diagonal, column by column. */
function entriesOf(model: ClusterModel, n: number, size: number): Column[] {
  const columns: Column[] = Array.from({ length: size }, (): Column => new Map());
  for (const { re, im, paulis } of model.strings) {
    let flips = 0;
    let signs = 0;
    let turns = 0;
    for (const { site, letter } of paulis) {
      const mask = 1 << (n - 1 - site);
      if (letter !== 'Z') flips |= mask;
      if (letter !== 'X') signs |= mask;
      // Y = i X Z.
      if (letter === 'Y') turns += 1;
    }
    for (let j = 0; j < size; j += 1) {
      const i = j ^ flips;
      if (i < j) continue;
      const quarter = (turns + 2 * parity(j & signs)) & 3;
      const [x, y] = turned(re, im, quarter);
      const before = columns[j]?.get(i) ?? [0, 0];
      columns[j]?.set(i, [before[0] + x, before[1] + y]);
    }
  }
  return columns;
}

function parity(bits: number): number {
  let odd = 0;
  for (let rest = bits; rest !== 0; rest &= rest - 1) odd ^= 1;
  return odd;
}

/** (re + i im) times i^quarter. */
const turned = (re: number, im: number, quarter: number): [number, number] =>
  quarter === 0 ? [re, im] : quarter === 1 ? [-im, re] : quarter === 2 ? [-re, -im] : [im, -re];
