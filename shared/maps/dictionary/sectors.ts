import { StabilizerGroup } from '../../algebra/finite/group.ts';
import { toDense, type SparseString } from '../../algebra/finite/sparse.ts';
import { bodyKey, toPauli, turned } from '../../algebra/finite/string.ts';
import type { FiniteString, SiteTable } from '../../algebra/finite/types.ts';
import { wrapExtended, wrapOrbit } from '../../algebra/finite/wrap.ts';
import type { Extended, LocalString, Pauli, ProductPart, Steps } from '../../algebra/pauli/types.ts';
import { newString } from '../../algebra/pauli/string.ts';
import { cellKinds, type Cell, type CellKind, type LatticeProblem, type Offset } from '../../lattice/cells.ts';
import type { Cluster } from '../../lattice/cluster.ts';
import { geometryTable } from '../../lattice/geometry.ts';
import type { SteppedCell } from '../../lattice/windings.ts';
import type { Budget } from '../../limits.ts';
import { lawsOf, speciesOf, type Context } from '../context.ts';
import { extendedPhrase, stringPhrase } from '../phrases.ts';
import { points } from '../steps.ts';

/** A string, or all translates of one, that has to take a value. */
export interface Sector {
  /** Name of the declared law or symmetry, where it is one. */
  readonly name: string | undefined;
  /** `flat`, `prod(l: loop(1)) g^z[l]`. */
  readonly words: string;
  /** `flat = +1`, `prod(l: loop(1)) g^z[l] = -1`. */
  readonly text: string;
  readonly value: 1 | -1;
  /** How many strings are meant, and how many of them are independent of the ones listed before. */
  readonly count: number;
  readonly independent: number;
  /** One of them, on the infinite lattice where it has a form there. */
  readonly example: LocalString | Extended | undefined;
  /** All of them, on the cluster. */
  readonly strings: readonly (FiniteString | SparseString)[];
}

/** Strings that a name stands for on a cluster. */
interface Candidate {
  readonly name: string | undefined;
  readonly text: string;
  readonly strings: readonly FiniteString[];
  readonly example: LocalString | Extended;
}

const paulis: readonly Pauli[] = ['x', 'y', 'z'];
const letters: Record<CellKind, string> = { vertices: 'v', links: 'l', plaquettes: 'p', cubes: 'c' };

const isCells = (cells: readonly SteppedCell[] | LatticeProblem): cells is readonly SteppedCell[] =>
  Array.isArray(cells);

/** Every declared law and symmetry whose spins are all on this side. */
function declared(
  table: SiteTable,
  cluster: Cluster,
  species: readonly string[],
  context: Context,
  budget: Budget,
): Candidate[] {
  const own = (s: LocalString) => s.factors.length > 0 && s.factors.every((f) => species.includes(f.species));
  const out: Candidate[] = [];
  const laws = lawsOf(context.values).filter((law) => !context.values.all.has(law.name));
  // a map's own laws before those of others
  const isOwn = (law: { readonly name: string }): boolean => law.name.startsWith(`${context.name}.`);
  const ordered = [...laws.filter(isOwn), ...laws.filter((law) => !isOwn(law))];
  for (const value of [...ordered, ...context.values.all.values()]) {
    if (value.what === 'law' && value.families.every((f) => own(f.string) && cluster.admits(f.steps))) {
      const strings = value.families.flatMap((f) => wrapOrbit(table, cluster, f, budget));
      const [first] = value.families;
      if (first) out.push({ name: value.name, text: value.name, strings, example: first.string });
    }
    // a part without factors is a sign for each translate
    if (
      value.what === 'symmetry' &&
      value.extended.parts.some((p) => own(p.string)) &&
      value.extended.parts.every((p) => (p.string.factors.length === 0 || own(p.string)) && cluster.admits(p.steps))
    )
      out.push({
        name: value.name,
        text: value.name,
        strings: [wrapExtended(table, cluster, value.extended, budget)],
        example: value.extended,
      });
  }
  return out;
}

/** For each species whether strings of a group hold X and Z of it (Y is both). */
function matricesOf(group: StabilizerGroup, table: SiteTable): ReadonlyMap<string, ReadonlySet<'x' | 'z'>> {
  const held = new Map<string, Set<'x' | 'z'>>();
  for (const g of group.generators)
    for (const { spin, pauli } of toPauli(toDense(g)).factors) {
      const species = table.sites[spin]?.species ?? '';
      const own = held.get(species) ?? new Set<'x' | 'z'>();
      held.set(species, own);
      if (pauli !== 'z') own.add('x');
      if (pauli !== 'x') own.add('z');
    }
  return held;
}

/** Products that every lattice has: rims, stars and their like, cycles around it, the whole lattice; in each Pauli matrix. */
function* familiar(
  forced: StabilizerGroup,
  table: SiteTable,
  cluster: Cluster,
  species: readonly string[],
  context: Context,
  budget: Budget,
): Generator<Candidate> {
  const { family } = context;
  const zero = Array<number>(family.dimension).fill(0);
  const all: Steps = zero.map(() => 1);
  const held = matricesOf(forced, table);
  for (const name of species) {
    const value = speciesOf(context, name);
    if (!value) continue;
    const carries = (c: Cell) => c.kind === value.kind && value.classes.includes(c.index);
    const own = held.get(name);
    for (const pauli of paulis) {
      // a product of strings of Z's is never an X
      if ((pauli !== 'z' && !own?.has('x')) || (pauli !== 'x' && !own?.has('z'))) continue;
      for (const f of geometryTable) {
        if (!f.dimensions.includes(family.dimension) || f.form === 'pairs' || f.gives !== value.kind) continue;
        if (f.form === 'around')
          for (const kind of f.takes) {
            if (!cellKinds.includes(kind)) continue;
            const strings = family[kind].map((_, index) =>
              newString(
                f
                  .cells(family, { kind, index, offset: zero })
                  .filter(carries)
                  .map((cell) => ({ species: name, cell, pauli, ...(f.optional ? { optional: true as const } : {}) })),
              ),
            );
            const [example] = strings;
            if (!example || strings.some((s) => s.factors.length < 2)) continue;
            yield {
              name: undefined,
              text: `prod(${letters[value.kind]}: ${f.name}(${letters[kind]})) ${name}^${pauli}[${letters[value.kind]}]`,
              strings: strings.flatMap((string) =>
                wrapOrbit(table, cluster, { string, steps: all, needs: [] }, budget),
              ),
              example,
            };
          }
        else
          for (let d = 1; d <= family.dimension; d++) {
            const cells = f.cells(family, d);
            if (!isCells(cells)) continue;
            const extended: Extended = {
              phase: 0,
              parts: cells
                .filter((c) => carries(c.cell))
                .map(({ cell, steps }): ProductPart => ({
                  string: { phase: 0, factors: [{ species: name, cell, pauli }] },
                  steps,
                  needs: [],
                })),
            };
            yield {
              name: undefined,
              text: `prod(l: ${f.name}(${String(d)})) ${name}^${pauli}[l]`,
              strings: [wrapExtended(table, cluster, extended, budget)],
              example: extended,
            };
          }
      }
      for (const steps of sublattices(family.dimension)) {
        if (!cluster.admits(steps)) continue;
        const start = (offset: Offset): Extended => ({
          phase: 0,
          parts: value.classes.map((index): ProductPart => ({
            string: { phase: 0, factors: [{ species: name, cell: { kind: value.kind, index, offset }, pauli }] },
            steps,
            needs: [],
          })),
        });
        const starts = startsOf(steps, cluster);
        const strings = starts.map((offset) => wrapExtended(table, cluster, start(offset), budget));
        const distinct = [...new Map(strings.map((s) => [bodyKey(s), s])).values()];
        yield {
          name: undefined,
          text: extendedPhrase(start(zero), family),
          strings: distinct,
          example: start(zero),
        };
      }
    }
  }
}

/** The whole lattice, then lines and planes of it, then its sublattices of period 2, as steps. */
function sublattices(dimension: number): number[][] {
  const zero = Array<number>(dimension).fill(0);
  const flags = (high: number) =>
    points(
      zero,
      zero.map(() => high),
    );
  const lines = flags(1).filter((s) => s.some((m) => m === 1) && s.some((m) => m === 0));
  const halves = flags(1).flatMap((s) => (s.some((m) => m === 1) ? [s.map((m) => m + 1)] : []));
  return [
    zero.map(() => 1),
    ...lines.sort((a, b) => total(b) - total(a)),
    ...halves.sort((a, b) => total(a) - total(b)),
  ];
}
const total = (steps: readonly number[]): number => steps.reduce((sum, m) => sum + m, 0);

/** Where the translates of a sublattice begin, one for each of them on the cluster. */
const startsOf = (steps: Steps, cluster: Cluster): Offset[] =>
  cluster
    .orbit(steps.map((m) => (m === 1 ? 0 : 1)))
    .filter((by) => by.every((c, d) => (steps[d] ?? 0) < 2 || (c >= 0 && c < (steps[d] ?? 1))));

/**
 * Words for the strings that a map forces to +1: declared laws and symmetries first, then products that every lattice has, at last single
 * strings, lightest first, until all independent ones are told.
 */
export function nameSectors(
  forced: StabilizerGroup,
  table: SiteTable,
  cluster: Cluster,
  species: readonly string[],
  context: Context,
  budget: Budget,
): Sector[] {
  if (forced.rank === 0) return [];
  const sectors: Sector[] = [];
  const told: (FiniteString | SparseString)[] = [];
  let rank = 0;
  const take = (c: Candidate, needed: boolean): void => {
    const byValue = new Map<number, FiniteString[]>();
    for (const s of c.strings) {
      const m = forced.membership(s);
      // phase 0: the string itself is +1; 2: it is −1
      if (m && m.phase % 2 === 0) byValue.set(m.phase, [...(byValue.get(m.phase) ?? []), s]);
    }
    for (const [phase, strings] of byValue) {
      const grown = new StabilizerGroup(table.sites.length, [...told, ...strings], budget).rank - rank;
      if (grown === 0 && needed) continue;
      told.push(...strings);
      rank += grown;
      const value = phase === 0 ? 1 : -1;
      const part =
        strings.length === c.strings.length ? '' : ` on ${String(strings.length)} of ${String(c.strings.length)} cells`;
      sectors.push({
        name: c.name,
        words: `${c.text}${part}`,
        text: `${c.text} = ${value === 1 ? '+1' : '-1'}${part}`,
        value,
        count: strings.length,
        independent: grown,
        example: c.example,
        strings,
      });
    }
  };
  for (const c of declared(table, cluster, species, context, budget)) take(c, true);
  if (rank < forced.rank)
    for (const c of familiar(forced, table, cluster, species, context, budget)) {
      take(c, true);
      if (rank === forced.rank) break;
    }
  if (rank === forced.rank) return sectors;
  const rest = [...new Map(forced.generators.map((g) => [bodyKey(toDense(g)), g])).values()].sort(
    (a, b) => a.spins.length - b.spins.length,
  );
  for (const g of rest) {
    if (rank === forced.rank) break;
    const grown = new StabilizerGroup(table.sites.length, [...told, g], budget).rank;
    if (grown === rank) continue;
    told.push(g);
    rank = grown;
    const { phase, factors } = toPauli(toDense(g));
    const string = newString(
      factors.flatMap(({ spin, pauli }) => {
        const site = table.sites[spin];
        return site ? [{ ...site, pauli }] : [];
      }),
    );
    const value = phase === 0 ? 1 : -1;
    sectors.push({
      name: undefined,
      words: stringPhrase(string, context.family),
      text: `${stringPhrase(string, context.family)} = ${value === 1 ? '+1' : '-1'}`,
      value,
      count: 1,
      independent: 1,
      example: string,
      strings: [turned(toDense(g), -phase)],
    });
  }
  return sectors;
}
