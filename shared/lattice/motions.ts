/** Symmetries of a family (translations apart) and of a cluster, as permutations of cells. */
import { cellKey, cellKinds, shifted, unit } from './cells.ts';
import type { Cell, CellKind, LatticeFamily, Offset } from './cells.ts';
import type { Cluster } from './cluster.ts';
import { linksBetween } from './family.ts';
import { boundary, boundaryKind } from './incidence.ts';
import { cartesian, determinant, dot, fractional, gram, offsetsWithin } from './vectors.ts';

/**
 * A map of the infinite lattice to itself that respects boundaries: unit cells move by an integer matrix, classes are
 * permuted and shifted.
 */
export interface Motion {
  /** matrix[d] is the image of one unit cell along direction d (dimension × dimension, determinant ±1). */
  readonly matrix: readonly (readonly number[])[];
  /** images[kind][index]: where the cell of that class in unit cell 0 goes. */
  readonly images: Readonly<Record<CellKind, readonly Cell[]>>;
}

/** Lengths and angles that agree to this fraction count as equal: vectors may be typed with three decimals. */
const tolerance = 1e-3;

/** Image of an offset under the matrix of a motion. */
const turned = (matrix: readonly (readonly number[])[], offset: Offset): number[] =>
  offset.map((_, k) => offset.reduce((sum, c, d) => sum + c * matrix[d]![k]!, 0));

/** The image of a cell under a motion. */
export function moveCell(motion: Motion, cell: Cell): Cell {
  const image = motion.images[cell.kind][cell.index];
  if (!image) throw new Error(`moveCell: no class ${String(cell.index)} of ${cell.kind}`);
  return shifted(image, turned(motion.matrix, cell.offset));
}

/** Integer matrices that keep all lengths of and angles between the primitive vectors, the identity among them. */
export function isometries(vectors: readonly (readonly number[])[]): number[][][] {
  const g = gram(vectors);
  const scale = Math.max(...g.map((row, d) => row[d]!));
  const product = (a: readonly number[], b: readonly number[]): number =>
    a.reduce((sum, x, p) => sum + x * dot(g[p]!, b), 0);
  const close = (x: number, y: number): boolean => Math.abs(x - y) <= tolerance * scale;
  const zero = vectors[0]!.map(() => 0);
  const ball = offsetsWithin(vectors, zero, Math.sqrt(scale) * (1 + tolerance));
  let found: number[][][] = [[]];
  vectors.forEach((_, d) => {
    found = found.flatMap((rows) =>
      ball
        .filter((o) => close(product(o, o), g[d]![d]!) && rows.every((r, e) => close(product(r, o), g[e]![d]!)))
        .map((o) => [...rows, o.map((c) => c + 0)]),
    );
  });
  return found.filter((m) => Math.abs(determinant(m)) === 1);
}

/** Positions of the vertices: along the primitive vectors (in unit cells), and what stands off their span (a ladder's second rail). */
interface Frame {
  readonly along: readonly (readonly number[])[];
  readonly off: readonly (readonly number[])[];
  /** Length of the longest primitive vector. */
  readonly scale: number;
}

function frameOf(family: LatticeFamily): Frame {
  const along = family.vertices.map((v) => fractional(family.vectors, v.position));
  const off = family.vertices.map((v, i) => v.position.map((x, k) => x - cartesian(family.vectors, along[i]!)[k]!));
  return { along, off, scale: Math.sqrt(Math.max(...family.vectors.map((v) => dot(v, v)))) };
}

/** A candidate: unit cells move by `matrix`, what stands off their span keeps or changes its sign, class 0 goes to class `target`. */
interface Candidate {
  readonly matrix: readonly (readonly number[])[];
  readonly sign: 1 | -1;
  readonly target: number;
}

/** Where each vertex class goes; undefined if some vertex finds no place. */
function vertexImages({ along, off, scale }: Frame, { matrix, sign, target }: Candidate): Cell[] | undefined {
  const taken = new Set<number>();
  const images: Cell[] = [];
  for (let i = 0; i < along.length; i++) {
    const spread = turned(
      matrix,
      along[i]!.map((x, d) => x - along[0]![d]!),
    );
    const goal = spread.map((x, d) => x + along[target]![d]!);
    const goalOff = off[i]!.map((x, k) => off[target]![k]! + sign * (x - off[0]![k]!));
    const index = along.findIndex(
      (place, j) =>
        !taken.has(j) &&
        place.every((x, d) => Math.abs(goal[d]! - x - Math.round(goal[d]! - x)) <= 3 * tolerance) &&
        off[j]!.every((x, k) => Math.abs(goalOff[k]! - x) <= 3 * tolerance * scale),
    );
    if (index < 0) return undefined;
    taken.add(index);
    // "+ 0" turns −0 into 0.
    images.push({ kind: 'vertices', index, offset: goal.map((x, d) => Math.round(x - along[index]![d]!) + 0) });
  }
  return images;
}

/** Offset that carries one list of cells, unordered, onto another of the same class; undefined if none does. */
function sameUpToShift(cells: readonly Cell[], pattern: readonly Cell[]): Offset | undefined {
  const sorted = (list: readonly Cell[]) => list.map(cellKey).sort().join(' ');
  const first = pattern[0];
  if (!first || cells.length !== pattern.length) return undefined;
  const goal = sorted(cells);
  for (const cell of cells) {
    if (cell.index !== first.index) continue;
    const offset = cell.offset.map((c, d) => c - first.offset[d]!);
    if (sorted(pattern.map((p) => shifted(p, offset))) === goal) return offset;
  }
  return undefined;
}

/** Images of one kind, given those of the kind below; undefined if a boundary is not mapped to one. */
function liftedImages(
  family: LatticeFamily,
  kind: Exclude<CellKind, 'vertices'>,
  move: (cell: Cell) => Cell,
): Cell[] | undefined {
  const zero = family.vectors.map(() => 0);
  const taken = new Set<number>();
  const images: Cell[] = [];
  for (let index = 0; index < family[kind].length; index++) {
    const around = boundary(family, { kind, index, offset: zero }).map(move);
    const candidates =
      kind === 'links'
        ? linksBetween(family.links, around[0]!, around[1]!)
        : family[kind].flatMap((_, other) => {
            const offset = sameUpToShift(around, boundary(family, { kind, index: other, offset: zero }));
            return offset ? [{ kind, index: other, offset }] : [];
          });
    // Double links have several places; the first free one makes the map a bijection.
    const image = candidates.find((c) => !taken.has(c.index));
    if (!image) return undefined;
    taken.add(image.index);
    images.push(image);
  }
  return images;
}

/** The motion of a candidate, or undefined if boundaries do not go to boundaries. */
function motionOf(family: LatticeFamily, frame: Frame, candidate: Candidate): Motion | undefined {
  const vertices = vertexImages(frame, candidate);
  if (!vertices) return undefined;
  const { matrix } = candidate;
  const images: Record<CellKind, readonly Cell[]> = { vertices, links: [], plaquettes: [], cubes: [] };
  for (const kind of ['links', 'plaquettes', 'cubes'] as const) {
    const below = boundaryKind(kind)!;
    const found = liftedImages(family, kind, (cell) =>
      shifted(images[below][cell.index]!, turned(matrix, cell.offset)),
    );
    if (!found) return undefined;
    images[kind] = found;
  }
  return { matrix, images };
}

const known = new WeakMap<LatticeFamily, readonly Motion[]>();

/**
 * The symmetries of a family modulo translations, the identity first: every isometry of the primitive vectors with
 * every place for the first vertex, kept if all cells find their images with boundaries on boundaries. Found by search
 * on the drawn positions, so a lattice drawn askew shows fewer; off the span of the vectors only reflections are tried.
 * Derived here.
 */
export function familyMotions(family: LatticeFamily): readonly Motion[] {
  const before = known.get(family);
  if (before) return before;
  const frame = frameOf(family);
  const flat = frame.off.every((o) => o.every((x, k) => Math.abs(x - frame.off[0]![k]!) <= tolerance * frame.scale));
  const found = isometries(family.vectors).flatMap((matrix) =>
    family.vertices.flatMap((_, target) =>
      (flat ? ([1] as const) : ([1, -1] as const)).flatMap((sign) => {
        const motion = motionOf(family, frame, { matrix, sign, target });
        return motion ? [motion] : [];
      }),
    ),
  );
  const first = found.findIndex(
    (m) =>
      m.matrix.every((row, d) => row.every((x, k) => x === Number(d === k))) &&
      cellKinds.every((kind) => m.images[kind].every((c, index) => c.index === index)),
  );
  if (first > 0) found.unshift(...found.splice(first, 1));
  known.set(family, found);
  return found;
}

/** A symmetry of a cluster: images[kind][n] is the number of the cell that cell n goes to. */
export interface ClusterMotion {
  readonly images: Readonly<Record<CellKind, Int32Array>>;
  /** The motion of the infinite lattice that it comes from, and the translation after it. */
  readonly motion: Motion;
  readonly shift: Offset;
}

/** The translation that brings a turned open piece back to 0 … L−1 along each open direction; 0 along periodic ones. */
function openShift(cluster: Cluster, motion: Motion): Offset {
  const low = cluster.periodic.map(() => Infinity);
  for (const cell of cluster.cells('vertices'))
    moveCell(motion, cell).offset.forEach((c, d) => (low[d] = Math.min(low[d]!, c)));
  return low.map((c, d) => (cluster.periodic[d] ? 0 : 0 - c));
}

/** The permutations of a motion followed by a shift; undefined if they do not map the cluster to itself. */
function permutations(cluster: Cluster, motion: Motion, shift: Offset): ClusterMotion['images'] | undefined {
  const images = {
    vertices: new Int32Array(0),
    links: new Int32Array(0),
    plaquettes: new Int32Array(0),
    cubes: new Int32Array(0),
  };
  for (const kind of cellKinds) {
    const list = new Int32Array(cluster.count(kind));
    const taken = new Uint8Array(list.length);
    for (let n = 0; n < list.length; n++) {
      const image = cluster.number(shifted(moveCell(motion, cluster.cell(kind, n)), shift));
      if (image === undefined || taken[image] === 1) return undefined;
      taken[image] = 1;
      list[n] = image;
    }
    images[kind] = list;
  }
  return images;
}

/** True if the periods of a torus go to periods, and open directions to open ones. */
function keepsPeriods(cluster: Cluster, motion: Motion): boolean {
  return cluster.size.periods.every(
    (row, d) => !cluster.periodic[d] || cluster.reduce(turned(motion.matrix, row)).every((c) => c === 0),
  );
}

/** Symmetries of a cluster modulo its translations, the identity first: the motions of its family that fit its periods and edges. */
export function clusterMotions(cluster: Cluster): ClusterMotion[] {
  return familyMotions(cluster.family).flatMap((motion) => {
    if (!keepsPeriods(cluster, motion)) return [];
    const shift = openShift(cluster, motion);
    const images = permutations(cluster, motion, shift);
    return images ? [{ images, motion, shift }] : [];
  });
}

/** One translation for each periodic direction: together they generate the translation group of the cluster. */
export function clusterTranslations(cluster: Cluster): ClusterMotion[] {
  const identity = familyMotions(cluster.family)[0]!;
  return cluster.periodic.flatMap((periodic, d) => {
    const shift = unit(cluster.dimension, d);
    const images = periodic ? permutations(cluster, identity, shift) : undefined;
    return images ? [{ images, motion: identity, shift }] : [];
  });
}
