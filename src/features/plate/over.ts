import type { LatticeFamily } from '../../../shared/lattice/drawing.ts';
import { overOf, type Ref } from '../../hand/hand.ts';
import type { Slice } from '../../reading/slices.ts';
import { shifts, type Site, sitesOf, type Support } from './supports.ts';

/** A term laid over a law: both strings, and the spins where the two anticommute. */

export interface Over {
  readonly term: Support;
  readonly law: Support;
  readonly names: { readonly term: string; readonly law: string };
  readonly meets: readonly Site[];
  /** Whether the two are claimed to commute. */
  readonly commutes: boolean;
}

const sameCell = (a: Site, b: Site): boolean =>
  a.species === b.species && a.kind === b.kind && a.index === b.index && a.offset.join() === b.offset.join();

/** Spins of `a` on which `b` acts by another Pauli matrix: each gives a sign −1 when the two change places. */
export const meeting = (a: readonly Site[], b: readonly Site[]): readonly Site[] =>
  a.filter((one) => b.some((other) => sameCell(one, other) && one.pauli !== other.pauli));

const moved = (sites: readonly Site[], by: readonly number[]): readonly Site[] =>
  sites.map((site) => ({ ...site, offset: site.offset.map((c, d) => c + (by[d] ?? 0)) }));

interface Factor {
  readonly species: string;
  readonly pauli: 'x' | 'y' | 'z';
  readonly cell: { readonly kind: Site['kind']; readonly index: number; readonly offset: readonly number[] };
}

const siteOf = ({ species, pauli, cell }: Factor): Site => ({ species, pauli, ...cell });

interface Witness {
  readonly left: { readonly string: readonly Factor[] };
  readonly right: { readonly string: readonly Factor[] };
}

const isWitness = (value: unknown): value is Witness => {
  const { left, right } = (value ?? {}) as { left?: { string?: unknown }; right?: { string?: unknown } };
  return Array.isArray(left?.string) && Array.isArray(right?.string);
};

interface Cell {
  readonly term: number;
  readonly law: string;
  readonly holds: boolean;
  readonly witness?: unknown;
}

/** What a reference to a mark of a commutation table lays over one another; undefined for other references, or when it is gone. */
export function laidOver(family: LatticeFamily, slices: readonly Slice[], ref: Ref | null): Over | undefined {
  const mark = overOf(ref);
  if (!mark) return undefined;
  const claims = slices.flatMap((slice) => slice.claims.map((item) => item.value));
  const cells = claims
    .filter((claim) => claim.audit === 'commute' && claim.subject === mark.model)
    .flatMap((claim) => (Array.isArray(claim.figures['table']) ? (claim.figures['table'] as readonly Cell[]) : []));
  const cell = cells.find((one) => one.term === mark.term && one.law === mark.law);
  if (!cell) return undefined;
  const names = { term: mark.model, law: mark.law };
  if (isWitness(cell.witness)) {
    const [term, law] = [cell.witness.left, cell.witness.right].map(({ string }) => string.map(siteOf));
    if (!term || !law) return undefined;
    const meets = meeting(term, law);
    return { term: { sites: term, repeats: [] }, law: { sites: law, repeats: [] }, names, meets, commutes: false };
  }
  const model = slices.flatMap((slice) => slice.models).find((item) => item.value.name === mark.model)?.value;
  const orbit = model?.terms.find((one) => one.piece === mark.term)?.orbit;
  const declared = slices.flatMap((slice) => slice.declarations).find((item) => item.value.name === mark.law)?.value;
  if (!orbit || !declared) return undefined;
  const term = sitesOf(family, orbit);
  const whole = declared.what === 'symmetry';
  const laws = declared.supports.map((one) => ({
    sites: sitesOf(family, one.orbit),
    repeats: whole ? one.steps : [],
  }));
  const law = nearest(term, laws, family.dimension);
  if (!law) return undefined;
  return { term: { sites: term, repeats: [] }, law, names, meets: meeting(term, law.sites), commutes: cell.holds };
}

/** The translate of a law that meets a term on the most spins; where none meets, the law as it is. */
function nearest(term: readonly Site[], laws: readonly Support[], dimension: number): Support | undefined {
  let best = laws[0];
  let most = 0;
  for (const law of laws)
    for (const shift of shifts(dimension)) {
      const sites = moved(law.sites, shift);
      const count = meeting(term, sites).length;
      if (count > most) {
        most = count;
        best = { ...law, sites };
      }
    }
  return best;
}
