import { cellPoint, type CellKind, type LatticeFamily } from '../../../shared/lattice/drawing.ts';
import type { Report } from '../../../shared/contracts/report.ts';
import type { Hand, Ref } from '../../hand/hand.ts';
import type { Slice } from '../../reading/slices.ts';

/** What the plate draws: the support of what is in hand, on the lattice of each page. Pure: a reading and a hand in, points out. */

export type PlateLattice = NonNullable<Report['lattice']>;

type Orbit = Slice['models'][number]['value']['terms'][number]['orbit'];

/** One Pauli matrix of the support on the infinite lattice. */
export interface Site {
  readonly species: string;
  /** Kind and number of the class: which cell of a unit cell it stands on. */
  readonly kind: CellKind;
  readonly index: number;
  readonly offset: readonly number[];
  readonly pauli: 'x' | 'y' | 'z';
}

const kinds: readonly CellKind[] = ['vertices', 'links', 'plaquettes', 'cubes'];

/** One string of the support, with the directions it is repeated in when it stands for a product over the lattice. */
export interface Support {
  readonly sites: readonly Site[];
  /** Every m-th unit cell in this direction also carries it; 0: it stands here only. */
  readonly repeats: readonly number[];
}

/** Class of "links.1", "vertices", "plaquettes.hexagon" in a family; undefined when the family has no such class. */
export function classOf(family: LatticeFamily, cell: string): { kind: CellKind; index: number } | undefined {
  const dot = cell.indexOf('.');
  const word = dot < 0 ? cell : cell.slice(0, dot);
  const kind = kinds.find((name) => name === word);
  if (!kind) return undefined;
  if (dot < 0) return family[kind].length > 0 ? { kind, index: 0 } : undefined;
  const label = cell.slice(dot + 1);
  const named = family[kind].findIndex((one) => one.labels.includes(label));
  const index = named >= 0 ? named : Number(label) - 1;
  return family[kind][index] ? { kind, index } : undefined;
}

export function sitesOf(family: LatticeFamily, orbit: Orbit): readonly Site[] {
  return orbit.flatMap((one) => {
    const found = classOf(family, one.cell);
    return found ? [{ ...found, species: one.species, offset: one.offset, pauli: one.pauli }] : [];
  });
}

/** The supports that a reference of the hand stands for, and its words. */
export interface Answered {
  readonly supports: readonly Support[];
  readonly spoken: string;
  readonly tex: string;
  /** True when the supports are parts of one product, all drawn; else they are alternatives, of which one is drawn. */
  readonly product: boolean;
  /** Alternatives that are not drawn. */
  readonly others: number;
}

/** What a reference names, looked up in the slices of the reading; undefined when it is gone. */
export function lookUp(family: LatticeFamily, slices: readonly Slice[], ref: Ref | null): Answered | undefined {
  if (ref === null) return undefined;
  return groupOf(family, slices, ref) ?? ruleOf(family, slices, ref) ?? declared(family, slices, ref);
}

function groupOf(family: LatticeFamily, slices: readonly Slice[], ref: Ref): Answered | undefined {
  const slash = ref.lastIndexOf('/');
  if (slash < 0) return undefined;
  const model = find(slices, (slice) => slice.models.find((item) => item.value.name === ref.slice(0, slash)));
  const index = Number(ref.slice(slash + 1));
  const group = model?.value.groups[index];
  if (!model || !group) return undefined;
  const terms = model.value.terms.filter((term) => term.group === index);
  const supports = terms.map((term) => ({ sites: sitesOf(family, term.orbit), repeats: [] }));
  return { supports, spoken: group.spoken, tex: group.tex, product: false, others: 0 };
}

function ruleOf(family: LatticeFamily, slices: readonly Slice[], ref: Ref): Answered | undefined {
  const [name, number, side] = ref.split(':');
  if (side !== 'left' && side !== 'right') return undefined;
  const map = find(slices, (slice) => slice.declarations.find((d) => d.value.what === 'map' && d.value.name === name));
  const rule = map?.value.rules?.[Number(number)];
  if (!rule) return undefined;
  const orbit = side === 'left' ? rule.leftOrbit : rule.rightOrbit;
  const supports = [{ sites: sitesOf(family, orbit), repeats: [] }];
  return { supports, spoken: '', tex: rule[side], product: false, others: 0 };
}

function declared(family: LatticeFamily, slices: readonly Slice[], ref: Ref): Answered | undefined {
  const found = find(slices, (slice) => slice.declarations.find((d) => d.value.name === ref))?.value;
  if (!found) return undefined;
  // A symmetry is the product over all translates; of a law or operator one is drawn.
  const whole = found.what === 'symmetry';
  const supports = found.supports.map((one) => ({
    sites: sitesOf(family, one.orbit),
    repeats: whole ? one.steps : [],
  }));
  return { supports, spoken: found.spoken, tex: found.tex, product: whole, others: 0 };
}

function find<T>(slices: readonly Slice[], pick: (slice: Slice) => T | undefined): T | undefined {
  for (const slice of slices) {
    const found = pick(slice);
    if (found !== undefined) return found;
  }
  return undefined;
}

export interface PlateSide {
  readonly answered: Answered | undefined;
  /** Classes of cells that carry a spin on this page, with the species that stands there. */
  readonly carriers: readonly { readonly species: string; readonly kind: CellKind; readonly index: number }[];
}

const cellWords: Readonly<Record<CellKind, string>> = {
  vertices: 'vertex',
  links: 'link',
  plaquettes: 'plaquette',
  cubes: 'cube',
};

/** "link 1 (0, −1)": one cell, as a reader is told of it. */
export function cellInWords(family: LatticeFamily, site: Pick<Site, 'kind' | 'index' | 'offset'>): string {
  const classes = family[site.kind];
  const label = classes.length > 1 ? ` ${classes[site.index]?.labels[0] ?? String(site.index + 1)}` : '';
  return `${cellWords[site.kind]}${label} (${site.offset.join(', ').replace(/-/g, '−')})`;
}

/** The same as the drawing, in words: "Z of s at vertex (0, 0), Z of s at vertex (1, 0)". */
export function supportInWords(family: LatticeFamily, supports: readonly Support[]): string {
  const strings = supports.map((support) => {
    const sites = support.sites.map(
      (site) => `${site.pauli.toUpperCase()} of ${site.species} at ${cellInWords(family, site)}`,
    );
    const repeated = support.repeats.flatMap((step, d) => (step > 0 ? [String(d + 1)] : []));
    const along = repeated.length > 0 ? `, repeated along direction ${repeated.join(' and ')}` : '';
    return `${sites.join(', ')}${along}`;
  });
  return strings.filter((text) => text !== '').join('; or ');
}

/** Species of each page, as the cells they stand on: those of the models of that language, else all. */
export function carriersOf(
  family: LatticeFamily,
  lattice: PlateLattice,
  slices: readonly Slice[],
  language: 'spin' | 'gauge',
): PlateSide['carriers'] {
  const named = slices.flatMap((slice) => slice.models.filter((m) => m.value.language === language));
  const wanted = new Set(named.flatMap((m) => m.value.species));
  return [...wanted].flatMap((species) => {
    const cell = lattice.species[species];
    if (cell === undefined) return [];
    if (!cell.includes('.')) {
      const kind = kinds.find((name) => name === cell);
      return kind ? family[kind].map((_, index) => ({ species, kind, index })) : [];
    }
    const found = classOf(family, cell);
    return found ? [{ species, ...found }] : [];
  });
}

/** Mean of the sites of a support, in unit cells; what stands within a unit cell counts by its position. */
function centreOf(family: LatticeFamily, support: Support): readonly number[] {
  const points = support.sites.map((site) => cellPoint(family, site));
  return [0, 1].map((axis) => points.reduce((sum, point) => sum + (point[axis] ?? 0), 0) / Math.max(1, points.length));
}

/** Shifts by at most this many unit cells are tried to bring an image beside its source. */
const reach = 2;

/**
 * Of the strings that a gathered term has (one for each direction of its links, say), the first; of its image the one that
 * stands nearest to that, moved by whole unit cells: families are the same wherever their representative was put.
 */
function facing(family: LatticeFamily, from: Support | undefined, supports: readonly Support[]): readonly Support[] {
  if (!from || supports.length === 0 || supports.some((support) => support.repeats.some((step) => step > 0)))
    return supports;
  const wanted = centreOf(family, from);
  let best: { support: Support; distance: number } | undefined;
  for (const support of supports)
    for (const shift of shifts(family.dimension)) {
      const moved = {
        ...support,
        sites: support.sites.map((site) => ({ ...site, offset: site.offset.map((c, d) => c + (shift[d] ?? 0)) })),
      };
      const at = centreOf(family, moved);
      const distance = Math.hypot(...at.map((c, axis) => c - (wanted[axis] ?? 0)));
      if (!best || distance < best.distance - 1e-9) best = { support: moved, distance };
    }
  return best ? [best.support] : supports;
}

export function shifts(dimension: number): readonly (readonly number[])[] {
  // Nearest shifts first, so that of equals the smallest wins.
  const range = Array.from({ length: 2 * reach + 1 }, (_, k) => (k % 2 === 0 ? -k / 2 : (k + 1) / 2));
  let all: readonly (readonly number[])[] = [[]];
  for (let d = 0; d < dimension; d += 1) all = all.flatMap((shift) => range.map((n) => [...shift, n]));
  return all;
}

export interface PlateSides {
  readonly left: PlateSide;
  readonly right: PlateSide;
}

/** Both sides of the plate for a hand: one string of the term in hand, and the string of its image that stands by it. */
export function plateSides(
  family: LatticeFamily,
  lattice: PlateLattice,
  slices: readonly Slice[],
  hand: Hand,
): PlateSides {
  const left = lookUp(family, slices, hand.held?.left ?? null);
  const right = lookUp(family, slices, hand.held?.right ?? null);
  const drawnLeft = left && one(left, family, undefined);
  const drawnRight = right && one(right, family, drawnLeft?.supports[0]);
  return {
    left: { answered: drawnLeft, carriers: carriersOf(family, lattice, slices, 'spin') },
    right: { answered: drawnRight, carriers: carriersOf(family, lattice, slices, 'gauge') },
  };
}

function one(answered: Answered, family: LatticeFamily, beside: Support | undefined): Answered {
  const whole = answered.supports.some((support) => support.repeats.some((step) => step > 0));
  if (whole || answered.product) return answered;
  const supports = beside ? facing(family, beside, answered.supports) : answered.supports.slice(0, 1);
  return { ...answered, supports, others: answered.supports.length - supports.length };
}
