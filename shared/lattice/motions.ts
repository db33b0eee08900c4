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

/** Where each vertex class goes if class 0 goes to class `target` in unit cell 0; undefined if some vertex has no place. */
function vertexImages(
  family: LatticeFamily,
  matrix: readonly (readonly number[])[],
  target: number,
): Cell[] | undefined {
  const first = family.vertices[0]!.position;
  const scale = Math.sqrt(Math.max(...family.vectors.map((v) => dot(v, v))));
  const taken = new Set<number>();
  const images: Cell[] = [];
  for (const vertex of family.vertices) {
    const apart = vertex.position.map((x, k) => x - first[k]!);
    const along = fractional(family.vectors, apart);
    // What of the difference stands off the span of the vectors (a ladder's second rail) stays as it is or changes sign.
    const off = apart.map((x, k) => x - cartesian(family.vectors, along)[k]!);
    const spread = cartesian(family.vectors, turned(matrix, along));
    const found =
      placeOf(family, target, spread, off, taken, scale) ??
      placeOf(
        family,
        target,
        spread,
        off.map((x) => -x),
        taken,
        scale,
      );
    if (!found) return undefined;
    taken.add(found.index);
    images.push(found);
  }
  return images;
}

/** The vertex at a position relative to class `target` in unit cell 0, of a class not yet taken. */
function placeOf(
  family: LatticeFamily,
  target: number,
  spread: readonly number[],
  off: readonly number[],
  taken: ReadonlySet<number>,
  scale: number,
): Cell | undefined {
  const start = family.vertices[target]!.position;
  for (const [index, vertex] of family.vertices.entries()) {
    if (taken.has(index)) continue;
    const apart = start.map((x, k) => x + spread[k]! + off[k]! - vertex.position[k]!);
    const offset = fractional(family.vectors, apart).map((c) => Math.round(c) + 0);
    const left = cartesian(family.vectors, offset).map((x, k) => apart[k]! - x);
    if (Math.sqrt(dot(left, left)) <= 3 * tolerance * scale) return { kind: 'vertices', index, offset };
  }
  return undefined;
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

function motionOf(family: LatticeFamily, matrix: readonly (readonly number[])[], target: number): Motion | undefined {
  const vertices = vertexImages(family, matrix, target);
  if (!vertices) return undefined;
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
 * on the drawn positions, so a lattice drawn askew shows fewer. Derived here.
 */
export function familyMotions(family: LatticeFamily): readonly Motion[] {
  const before = known.get(family);
  if (before) return before;
  const isIdentity = (m: Motion): boolean =>
    m.matrix.every((row, d) => row.every((x, k) => x === Number(d === k))) && m.images.vertices[0]!.index === 0;
  const all = isometries(family.vectors).flatMap((matrix) =>
    family.vertices.flatMap((_, target) => motionOf(family, matrix, target) ?? []),
  );
  const found = [...all.filter(isIdentity), ...all.filter((m) => !isIdentity(m))];
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
