import { BudgetSpent, limits } from '../../limits.ts';
import { shifted, type Cell, type CellKind, type Offset } from '../../lattice/cells.ts';
import type { Factor, LocalString, Pauli, Phase, Site } from './types.ts';

const kindRank: Record<CellKind, number> = { vertices: 0, links: 1, plaquettes: 2, cubes: 3 };

/** Order of offsets: lexicographic. It does not change when both are translated. */
export function compareOffsets(a: Offset, b: Offset): number {
  for (let d = 0; d < a.length; d++) {
    const difference = (a[d] ?? 0) - (b[d] ?? 0);
    if (difference !== 0) return difference;
  }
  return a.length - b.length;
}

/** Order of cells: kind, class, offset. */
export const compareCells = (a: Cell, b: Cell): number =>
  kindRank[a.kind] - kindRank[b.kind] || a.index - b.index || compareOffsets(a.offset, b.offset);

/** Order of the factors of a string: species, kind, class, offset; invariant under translation, so a translate needs no sorting. */
export const factorOrder = (a: Site, b: Site): number =>
  a.species === b.species ? compareCells(a.cell, b.cell) : a.species < b.species ? -1 : 1;

/** Key of a spin, unique on the infinite lattice. */
export const siteKey = (site: Site): string => `${classKey(site)}@${site.cell.offset.join(',')}`;

/** Key of the class of a spin: species, kind and index, without its offset. */
export const classKey = (site: Site): string => `${site.species} ${site.cell.kind} ${String(site.cell.index)}`;

export const identityString: LocalString = { phase: 0, factors: [] };

export const toPhase = (n: number): Phase => (((n % 4) + 4) % 4) as Phase;

/** p·q = i^phase pauli; no pauli means the identity. */
export function multiplyPaulis(p: Pauli, q: Pauli): { readonly phase: Phase; readonly pauli: Pauli | undefined } {
  if (p === q) return { phase: 0, pauli: undefined };
  const order = 'xyz';
  const [a, b] = [order.indexOf(p), order.indexOf(q)];
  const third = order[3 - a - b] as Pauli;
  return { phase: (b - a + 3) % 3 === 1 ? 1 : 3, pauli: third };
}

/** i^phase times the factors in the order given: sorts them and multiplies those on one spin. */
export function newString(factors: readonly Factor[], phase = 0): LocalString {
  return factors.reduce<LocalString>((product, factor) => multiplyStrings(product, { phase: 0, factors: [factor] }), {
    phase: toPhase(phase),
    factors: [],
  });
}

/** Joins two factors on one spin; the spin must exist on an open lattice if either of them says so. */
function joined(f: Factor, pauli: Pauli, g: Factor): Factor {
  return f.optional && g.optional
    ? { species: f.species, cell: f.cell, pauli, optional: true }
    : { species: f.species, cell: f.cell, pauli };
}

/**
 * Product a·b. Linear in the number of factors; phases are exact (XY = iZ).
 * Throws BudgetSpent past limits.factors factors.
 */
export function multiplyStrings(a: LocalString, b: LocalString): LocalString {
  if (a.factors.length === 0) return { phase: toPhase(a.phase + b.phase), factors: b.factors };
  if (b.factors.length === 0) return { phase: toPhase(a.phase + b.phase), factors: a.factors };
  let phase = a.phase + b.phase;
  const factors: Factor[] = [];
  let i = 0;
  let j = 0;
  for (;;) {
    const f = a.factors[i];
    const g = b.factors[j];
    if (!f && !g) break;
    const order = !f ? 1 : !g ? -1 : factorOrder(f, g);
    if (f && order < 0) {
      factors.push(f);
      i++;
    } else if (g && order > 0) {
      factors.push(g);
      j++;
    } else if (f && g) {
      const product = multiplyPaulis(f.pauli, g.pauli);
      phase += product.phase;
      if (product.pauli) factors.push(joined(f, product.pauli, g));
      i++;
      j++;
    }
  }
  if (factors.length > limits.factors) throw new BudgetSpent(`factors of one Pauli string (${String(limits.factors)})`);
  return { phase: toPhase(phase), factors };
}

/** Hermitian conjugate: the Pauli product is Hermitian, so only the phase turns. */
export const adjointString = (a: LocalString): LocalString => ({ phase: toPhase(-a.phase), factors: a.factors });

/** The string moved by whole unit cells. */
export const translateString = (a: LocalString, by: Offset): LocalString =>
  by.every((b) => b === 0)
    ? a
    : { phase: a.phase, factors: a.factors.map((f) => ({ ...f, cell: shifted(f.cell, by) })) };

/** Number of spins it acts on. */
export const weight = (a: LocalString): number => a.factors.length;

/** Key of the Pauli product, without phase and without what matters at open edges only. */
export const bodyKey = (a: LocalString): string => a.factors.map((f) => `${f.pauli}:${siteKey(f)}`).join(' ');

/** Key of the whole string. */
export const stringKey = (a: LocalString): string => `${String(a.phase)}|${bodyKey(a)}`;

/** Equal as operators on the infinite lattice. */
export const equalStrings = (a: LocalString, b: LocalString): boolean =>
  a.phase === b.phase &&
  a.factors.length === b.factors.length &&
  a.factors.every((f, k) => {
    const g = b.factors[k];
    return g !== undefined && f.pauli === g.pauli && factorOrder(f, g) === 0;
  });

/** Spins on which both act with different Pauli matrices; the strings commute if their number is even. */
export function overlap(a: LocalString, b: LocalString): Site[] {
  const sites: Site[] = [];
  for (let i = 0, j = 0; ;) {
    const f = a.factors[i];
    const g = b.factors[j];
    if (!f || !g) return sites;
    const order = factorOrder(f, g);
    if (order === 0 && f.pauli !== g.pauli) sites.push({ species: f.species, cell: f.cell });
    if (order <= 0) i++;
    if (order >= 0) j++;
  }
}
export const stringsCommute = (a: LocalString, b: LocalString): boolean => overlap(a, b).length % 2 === 0;

/**
 * Reads a string on the vertices of a chain or, with several entries, of any lattice: "X0 Z1", "-i Y(0,1)", "sX0 gZ2" names species.
 * For tests and the console; the language has a parser of its own. Throws RangeError on other text.
 */
export function stringFromText(text: string, kind: CellKind = 'vertices'): LocalString {
  const m = /^\s*([+-]?)\s*(i?)\s*(.*)$/.exec(text);
  const phase = (m?.[1] === '-' ? 2 : 0) + (m?.[2] === 'i' ? 1 : 0);
  const factors = (m?.[3] ?? '')
    .split(/\s+/)
    .filter((word) => word !== '' && word !== '1')
    .map((word): Factor => {
      const part = /^([a-z]*)([XYZ])(?:(-?\d+)|\((-?\d+(?:,-?\d+)*)\))(?:\.(\d+))?$/.exec(word);
      if (!part) throw new RangeError(`"${word}" is not a factor like X0 or sZ(1,0).2`);
      const [, species, pauli = '', single, several, index] = part;
      const offset = (several ?? single ?? '0').split(',').map(Number);
      const cell: Cell = { kind, index: Number(index ?? 0), offset };
      return { species: species === '' ? 's' : (species ?? 's'), cell, pauli: pauli.toLowerCase() as Pauli };
    });
  return newString(factors, phase);
}

/** Short text of a string, as `stringFromText` reads it. */
export function stringText(a: LocalString): string {
  const sign = ['', 'i ', '-', '-i '][a.phase] ?? '';
  const body = a.factors.map((f) => {
    const { offset, index } = f.cell;
    const where = offset.length === 1 ? String(offset[0]) : `(${offset.join(',')})`;
    return `${f.species}${f.pauli.toUpperCase()}${where}${index > 0 ? `.${String(index)}` : ''}`;
  });
  return `${sign}${body.length > 0 ? body.join(' ') : '1'}`;
}
