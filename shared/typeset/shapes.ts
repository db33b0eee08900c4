import { bodyKey, compareOffsets, siteKey, translateString } from '../algebra/pauli/string.ts';
import type { Factor, LocalString, Pauli, Steps } from '../algebra/pauli/types.ts';
import {
  cellKey,
  cellKinds,
  classLabel,
  isLatticeProblem,
  type Cell,
  type CellKind,
  type LatticeFamily,
  type Offset,
} from '../lattice/cells.ts';
import { boundary, coboundary } from '../lattice/incidence.ts';
import { nearestPairs } from '../lattice/pairs.ts';
import { rank, type TypesetContext } from './context.ts';

export interface ShiftedCell {
  readonly kind: CellKind;
  /** Its class, where the kind has several. */
  readonly label: string;
  readonly by: Offset;
}

/** Where the factors of one species and Pauli stand, seen from the cell that a term is anchored at. */
export type Spot =
  | { readonly at: 'self' }
  /** All cells of another kind that lie in the anchor (rim, corners) or contain it (star, sides). */
  | { readonly at: 'incident'; readonly kind: CellKind; readonly count: number }
  /** Vertices joined to the anchor by a link. */
  | { readonly at: 'neighbours' }
  /** Cells in a row: `count` of them from `cell` on, one unit cell further along the direction (from 0) each time. */
  | { readonly at: 'run'; readonly cell: ShiftedCell; readonly direction: number; readonly count: number }
  /** Cells named one by one, relative to the anchor's unit cell. */
  | { readonly at: 'shifts'; readonly cells: readonly ShiftedCell[] };

export interface SpotGroup {
  readonly species: string;
  readonly pauli: Pauli;
  readonly spot: Spot;
}

/** The structure of a string on its lattice, free of place: what a theorist would write after the sum sign. */
export interface Shape {
  readonly key: string;
  /** `cell`: anchored at a unit cell, where factors are named one by one. */
  readonly anchor: CellKind | 'cell';
  readonly groups: readonly SpotGroup[];
  /** Name of a declared operator that this is. */
  readonly named: string | undefined;
  /** k where the sum runs over all k-th-nearest pairs of vertices. */
  readonly shell?: number;
}

export interface Placed {
  readonly shape: Shape;
  /** Class and unit cell of the anchor. */
  readonly index: number;
  readonly offset: Offset;
  /** −1 where a named operator stands for minus the string. */
  readonly sign: 1 | -1;
}

const unique = (cells: readonly Cell[]): Cell[] => [...new Map(cells.map((c) => [cellKey(c), c])).values()];

/** All cells of `kind` incident to a cell: in its closure or containing it, once each; itself for its own kind. */
export function incident(family: LatticeFamily, cell: Cell, kind: CellKind): Cell[] {
  const step = rank[kind] < rank[cell.kind] ? boundary : coboundary;
  let cells: Cell[] = [cell];
  for (let k = rank[cell.kind]; k !== rank[kind]; k += rank[kind] < rank[cell.kind] ? -1 : 1)
    cells = unique(cells.flatMap((c) => step(family, c)));
  return cells;
}

/** Vertices joined to a vertex by a link, once each. */
export const neighbours = (family: LatticeFamily, vertex: Cell): Cell[] =>
  unique(incident(family, vertex, 'links').flatMap((l) => boundary(family, l))).filter(
    (c) => cellKey(c) !== cellKey(vertex),
  );

interface Group {
  readonly species: string;
  readonly pauli: Pauli;
  readonly cells: Cell[];
}

function grouped(string: LocalString): Group[] {
  const groups = new Map<string, Group>();
  for (const f of string.factors) {
    const key = `${f.species}^${f.pauli}`;
    const group = groups.get(key) ?? { species: f.species, pauli: f.pauli, cells: [] };
    group.cells.push(f.cell);
    groups.set(key, group);
  }
  return [...groups.values()];
}

const sameCells = (a: readonly Cell[], b: readonly Cell[]): boolean => {
  const keys = new Set(a.map(cellKey));
  return a.length === b.length && b.every((c) => keys.has(cellKey(c)));
};

function spotFrom(anchor: Cell, group: Group, family: LatticeFamily): Spot | undefined {
  const [first] = group.cells;
  if (!first) return undefined;
  if (first.kind !== anchor.kind) {
    const cells = incident(family, anchor, first.kind);
    return sameCells(cells, group.cells) ? { at: 'incident', kind: first.kind, count: cells.length } : undefined;
  }
  if (sameCells([anchor], group.cells)) return { at: 'self' };
  // on a chain two named neighbours read better than a product over them
  if (anchor.kind === 'vertices' && family.dimension > 1 && sameCells(neighbours(family, anchor), group.cells))
    return { at: 'neighbours' };
  return undefined;
}

const spotKey = (s: Spot): string =>
  s.at === 'incident'
    ? `incident ${s.kind}`
    : s.at === 'run'
      ? `run ${s.cell.kind}.${s.cell.label}@${s.cell.by.join(',')} ${String(s.direction)}x${String(s.count)}`
      : s.at === 'shifts'
        ? s.cells.map((c) => `${c.kind}.${c.label}@${c.by.join(',')}`).join(' ')
        : s.at;

const shapeOf = (anchor: Shape['anchor'], groups: readonly SpotGroup[]): Shape => ({
  key: `${anchor}: ${groups.map((g) => `${g.species}^${g.pauli} ${spotKey(g.spot)}`).join('; ')}`,
  anchor,
  groups,
  named: undefined,
});

/** Order in which a product is read: the matter before, the field after; singles before products. */
function structured(string: LocalString, family: LatticeFamily): Placed | undefined {
  const groups = grouped(string);
  const [smallest] = [...groups].sort((a, b) => a.cells.length - b.cells.length);
  const [probe] = smallest?.cells ?? [];
  if (!probe) return undefined;
  for (const kind of cellKinds) {
    if (family[kind].length === 0) continue;
    const candidates =
      probe.kind !== kind
        ? incident(family, probe, kind)
        : kind === 'vertices'
          ? [probe, ...neighbours(family, probe)]
          : [probe];
    for (const anchor of candidates) {
      const spots = groups.map((g) => spotFrom(anchor, g, family));
      if (spots.some((s) => s === undefined)) continue;
      const found = groups.flatMap((g, k): SpotGroup[] => {
        const spot = spots[k];
        return spot ? [{ species: g.species, pauli: g.pauli, spot }] : [];
      });
      return { shape: shapeOf(kind, found), index: anchor.index, offset: anchor.offset, sign: 1 };
    }
  }
  return undefined;
}

/** The factor that explicit places are counted from: the only one of its species and Pauli, else the first. */
function origin(string: LocalString): Factor | undefined {
  const lone = string.factors.filter(
    (f) => string.factors.filter((g) => g.species === f.species && g.pauli === f.pauli).length === 1,
  );
  const all = lone.length > 0 && lone.length < string.factors.length ? lone : string.factors;
  return [...all].sort((a, b) => compareOffsets(a.cell.offset, b.cell.offset))[0];
}

/** Factors in a row that are written as one product over a running index. */
const leastRun = 4;

interface Run {
  readonly factors: readonly [Factor, ...Factor[]];
  readonly direction: number;
}

/** Factors alike on neighbouring unit cells along one direction, joined where there are at least `leastRun` of them; the others by themselves. */
function inRuns(sorted: readonly Factor[], dimension: number): Run[] {
  const key = (f: Factor, offset: Offset) => `${f.pauli}:${siteKey({ ...f, cell: { ...f.cell, offset } })}`;
  const left = new Map(sorted.map((f) => [key(f, f.cell.offset), f]));
  const runs: Run[] = [];
  for (const f of sorted) {
    if (!left.has(key(f, f.cell.offset))) continue;
    const rows = Array.from({ length: dimension }, (_, direction): Run => {
      const factors: [Factor, ...Factor[]] = [f];
      for (let k = 1; ; k++) {
        const next = left.get(
          key(
            f,
            f.cell.offset.map((c, d) => (d === direction ? c + k : c)),
          ),
        );
        if (!next) return { factors, direction };
        factors.push(next);
      }
    });
    const [longest] = rows.sort((a, b) => b.factors.length - a.factors.length);
    const run: Run = longest && longest.factors.length >= leastRun ? longest : { factors: [f], direction: 0 };
    runs.push(run);
    for (const g of run.factors) left.delete(key(g, g.cell.offset));
  }
  return runs;
}

function explicit(string: LocalString, family: LatticeFamily): Placed {
  const from = origin(string);
  const kinds = new Set(string.factors.map((f) => f.cell.kind));
  const [kind] = kinds;
  const single = kinds.size === 1 && kind !== undefined && family[kind].length === 1;
  const base = from?.cell.offset ?? [];
  const sorted = [...string.factors].sort(
    (a, b) => compareOffsets(a.cell.offset, b.cell.offset) || a.cell.index - b.cell.index,
  );
  const shiftOf = (f: Factor): ShiftedCell => ({
    kind: f.cell.kind,
    label: single ? '' : classLabel(family, f.cell.kind, f.cell.index),
    by: f.cell.offset.map((c, d) => c - (base[d] ?? 0)),
  });
  const groups = inRuns(sorted, family.dimension).map((run): SpotGroup => {
    const [f] = run.factors;
    const spot: Spot =
      run.factors.length === 1
        ? { at: 'shifts', cells: [shiftOf(f)] }
        : { at: 'run', cell: shiftOf(f), direction: run.direction, count: run.factors.length };
    return { species: f.species, pauli: f.pauli, spot };
  });
  return { shape: shapeOf(single ? kind : 'cell', groups), index: 0, offset: base, sign: 1 };
}

/** A declared operator of which the string is one instance, with its sign. */
function named(string: LocalString, steps: Steps, context: TypesetContext): Placed | undefined {
  const [first] = string.factors;
  if (!first || string.factors.length < 2) return undefined;
  for (const shape of context.names)
    for (const instance of shape.instances) {
      const own = instance.string.factors[0];
      if (!own || instance.string.factors.length !== string.factors.length || instance.string.phase % 2 === 1) continue;
      if (
        siteKey({ ...own, cell: { ...own.cell, offset: [] } }) !==
        siteKey({ ...first, cell: { ...first.cell, offset: [] } })
      )
        continue;
      const by = first.cell.offset.map((c, d) => c - (own.cell.offset[d] ?? 0));
      const reached = by.every((c, d) => (instance.steps[d] ? c % instance.steps[d] === 0 : c === 0));
      const moves = steps.every(
        (m, d) => m === 0 || ((instance.steps[d] ?? 0) > 0 && m % (instance.steps[d] ?? 1) === 0),
      );
      if (!reached || !moves || bodyKey(translateString(instance.string, by)) !== bodyKey(string)) continue;
      return {
        shape: { key: `named ${shape.name}`, anchor: shape.kind, groups: [], named: shape.name },
        index: instance.index,
        offset: by,
        sign: instance.string.phase === 2 ? -1 : 1,
      };
    }
  return undefined;
}

/**
 * The shape of a string: a declared name if it has one, else what incidence recognises on any lattice (ends, star, rim, corners, sides,
 * faces, edges, neighbours of one cell), else its factors one by one.
 */
export function placed(string: LocalString, steps: Steps, context: TypesetContext): Placed {
  const known = placedBefore.get(context) ?? new Map<string, Placed>();
  placedBefore.set(context, known);
  const key = `${String(string.phase)} ${bodyKey(string)} ${steps.join(',')}`;
  const before = known.get(key);
  if (before) return before;
  const now = named(string, steps, context) ?? structured(string, context.family) ?? explicit(string, context.family);
  if (known.size >= mostPlaced) known.clear();
  known.set(key, now);
  return now;
}

/** Strings placed before: the same few stand in model after model, and each is asked for in its sum and by itself. */
const placedBefore = new WeakMap<TypesetContext, Map<string, Placed>>();
const mostPlaced = 20_000;

/** Farthest shell of vertex pairs that is looked for. */
const mostShells = 4;

/** Key of a pair of vertices up to translation, either way round. */
function pairKey(a: Cell, b: Cell): string {
  const by = (from: Cell, to: Cell) =>
    `${String(from.index)}>${String(to.index)}@${to.offset.map((c, d) => c - (from.offset[d] ?? 0)).join(',')}`;
  return [by(a, b), by(b, a)].sort()[0] ?? '';
}

/**
 * Shells of vertex pairs that a set of pairs fills: for each pair the k of its shell, where all k-th-nearest pairs of the lattice are there.
 * On a chain shifts say the same, so none is named there.
 */
export function fullShells(pairs: readonly (readonly [Cell, Cell])[], family: LatticeFamily): (number | undefined)[] {
  if (family.dimension === 1 || pairs.length === 0) return pairs.map(() => undefined);
  const keys = pairs.map(([a, b]) => pairKey(a, b));
  const present = new Set(keys);
  const shellOf = new Map<string, number>();
  for (let k = 2; k <= mostShells; k++) {
    const shell = nearestPairs(family, k);
    if (isLatticeProblem(shell)) break;
    const own = shell.map(({ a, b }) => pairKey(a, b));
    if (own.every((key) => present.has(key))) for (const key of own) shellOf.set(key, k);
  }
  return keys.map((key) => shellOf.get(key));
}

/** The shape of a sum over a whole shell. */
export const shellShape = (species: string, pauli: Pauli, shell: number): Shape => ({
  key: `pairs ${String(shell)}: ${species}^${pauli}`,
  anchor: 'cell',
  groups: [{ species, pauli, spot: { at: 'incident', kind: 'vertices', count: 2 } }],
  named: undefined,
  shell,
});
