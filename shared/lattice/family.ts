/** From a declaration (vectors, vertices, links, corners, faces) to a LatticeFamily, or to the list of what is wrong with it. */
import { cellKey, isLatticeProblem, sameCell, shifted } from './cells.ts';
import type {
  Cell,
  CubeClass,
  LatticeFamily,
  LatticeProblem,
  LinkClass,
  Offset,
  PlaquetteClass,
  VertexClass,
} from './cells.ts';
import { gram, invert } from './vectors.ts';

/** A cell named by a label and a shift: `A + (1, 0)`. */
export interface NamedCell {
  readonly label: string;
  readonly offset: Offset;
}

/** A family as declared. The first label of a vertex or plaquette is the one by which it is named. */
export interface FamilyData {
  readonly name: string;
  /** Primitive vectors, Cartesian: one row for each direction, 1 to 3 components. */
  readonly vectors: readonly (readonly number[])[];
  readonly vertices: readonly { readonly labels: readonly string[]; readonly position: readonly number[] }[];
  readonly links: readonly { readonly labels: readonly string[]; readonly a: NamedCell; readonly b: NamedCell }[];
  readonly plaquettes: readonly { readonly labels: readonly string[]; readonly corners: readonly NamedCell[] }[];
  readonly cubes: readonly { readonly labels: readonly string[]; readonly faces: readonly NamedCell[] }[];
}

/** Most classes of one kind, and most unit cells that one declared cell may reach across. */
export const familyLimits = { classes: 200, reach: 16 } as const;

type Part = NonNullable<LatticeProblem['part']>;
const kindOfPart: Readonly<Record<Part, LatticeProblem['problem']>> = {
  vectors: 'vectors',
  vertices: 'vertex',
  links: 'link',
  plaquettes: 'plaquette',
  cubes: 'cube',
};

const fault = (part: Part, index: number, name: string, message: string): LatticeProblem => ({
  problem: kindOfPart[part],
  message,
  which: name,
  part,
  index,
});

const text = (cell: NamedCell): string =>
  cell.offset.every((c) => c === 0) ? cell.label : `${cell.label} + (${cell.offset.join(', ')})`;

/** Mean of the positions of cells, each with its own list of class positions. */
function centre(
  cells: readonly Cell[],
  family: { readonly vectors: readonly (readonly number[])[] },
  of: readonly { readonly position: readonly number[] }[],
): number[] {
  const sum = new Array<number>(family.vectors[0]?.length ?? 0).fill(0);
  for (const cell of cells)
    for (let k = 0; k < sum.length; k++) {
      sum[k]! += of[cell.index]!.position[k]!;
      cell.offset.forEach((c, d) => (sum[k]! += c * family.vectors[d]![k]!));
    }
  return sum.map((s) => s / cells.length);
}

/** Every link of the infinite lattice that joins two vertices, in either direction. */
export function linksBetween(links: readonly LinkClass[], from: Cell, to: Cell): Cell[] {
  return links.flatMap((link, index) =>
    (
      [
        [link.a, link.b],
        [link.b, link.a],
      ] as const
    ).flatMap(([s, t]) => {
      if (s.index !== from.index || t.index !== to.index) return [];
      const offset = from.offset.map((c, d) => c - s.offset[d]!);
      return sameCell(shifted(t, offset), to) ? [{ kind: 'links' as const, index, offset }] : [];
    }),
  );
}

/** Cells that occur an odd number of times, in order of first occurrence. */
export function oddCells(cells: readonly Cell[]): Cell[] {
  const count = new Map<string, number>();
  for (const cell of cells) count.set(cellKey(cell), (count.get(cellKey(cell)) ?? 0) + 1);
  const seen = new Set<string>();
  return cells.filter((cell) => {
    const key = cellKey(cell);
    if (seen.has(key)) return false;
    seen.add(key);
    return count.get(key)! % 2 === 1;
  });
}

function vectorProblems(data: FamilyData): LatticeProblem[] {
  const { vectors } = data;
  const width = vectors[0]?.length ?? 0;
  if (vectors.length < 1 || vectors.length > 3)
    return [fault('vectors', 0, 'the cell', `a lattice has 1 to 3 primitive vectors, got ${String(vectors.length)}`)];
  const wrong = vectors.findIndex((v) => v.length !== width || v.length > 3 || !v.every(Number.isFinite));
  if (wrong >= 0)
    return [
      fault(
        'vectors',
        wrong,
        `primitive vector ${String(wrong + 1)}`,
        `all primitive vectors need the same number of finite components, at most 3`,
      ),
    ];
  const inverse = vectors.length <= width ? invert(gram(vectors)) : undefined;
  return inverse
    ? []
    : [fault('vectors', vectors.length - 1, 'the cell', 'the primitive vectors are linearly dependent')];
}

/** Turns a declared cell into a Cell by the index of its label. */
function resolver(kind: Cell['kind'], names: ReadonlyMap<string, readonly number[]>, dimension: number) {
  return (part: Part, index: number, owner: string, cell: NamedCell): Cell | LatticeProblem => {
    const found = names.get(cell.label) ?? [];
    const say = (message: string) => fault(part, index, owner, message);
    if (found.length === 0)
      return say(
        `${owner}: there is no ${kind === 'vertices' ? 'vertex' : 'plaquette'} ${cell.label}; declared are ${[...names.keys()].join(', ') || 'none'}`,
      );
    if (found.length > 1)
      return say(`${owner}: ${cell.label} names ${String(found.length)} plaquettes; give each its own label`);
    if (cell.offset.length !== dimension || !cell.offset.every(Number.isInteger))
      return say(
        `${owner}: a shift has ${String(dimension)} whole ${dimension === 1 ? 'entry' : 'entries'}, got (${cell.offset.join(', ')})`,
      );
    if (cell.offset.some((c) => Math.abs(c) > familyLimits.reach))
      return say(
        `${owner}: a shift reaches at most ${String(familyLimits.reach)} unit cells, got (${cell.offset.join(', ')})`,
      );
    return { kind, index: found[0]!, offset: cell.offset };
  };
}

const group = (items: readonly { readonly labels: readonly string[] }[]): Map<string, number[]> => {
  const names = new Map<string, number[]>();
  items.forEach((item, index) => {
    const label = item.labels[0] ?? '';
    names.set(label, [...(names.get(label) ?? []), index]);
  });
  return names;
};

/**
 * Builds a family: rims from corners and links, edges of cubes from faces, centres from corners.
 * The problems come in the order of the declaration; later parts are not looked at when an earlier one is wrong.
 */
export function buildFamily(data: FamilyData): LatticeFamily | readonly LatticeProblem[] {
  const problems: LatticeProblem[] = [...vectorProblems(data)];
  for (const part of ['vertices', 'links', 'plaquettes', 'cubes'] as const)
    if (data[part].length > familyLimits.classes)
      problems.push({
        ...fault(part, familyLimits.classes, part, `at most ${String(familyLimits.classes)} ${part} in a unit cell`),
        problem: 'limit',
      });
  if (data.vertices.length === 0)
    problems.push(fault('vertices', 0, 'the cell', 'a lattice needs at least one vertex'));
  if (problems.length > 0) return problems;
  const dimension = data.vectors.length;
  const width = data.vectors[0]!.length;

  const names = group(data.vertices);
  const vertices = data.vertices.map((v, index): VertexClass => {
    const label = v.labels[0] ?? '';
    if (names.get(label)![0] !== index)
      problems.push(fault('vertices', index, `vertex ${label}`, `vertex ${label} is declared twice`));
    if (v.position.length !== width || !v.position.every(Number.isFinite))
      problems.push(
        fault(
          'vertices',
          index,
          `vertex ${label}`,
          `vertex ${label} needs ${String(width)} coordinates, as the primitive vectors have`,
        ),
      );
    return { kind: 'vertices', labels: v.labels, position: v.position };
  });
  if (problems.length > 0) return problems;

  const vertex = resolver('vertices', names, dimension);
  const links = data.links.flatMap((l, index): LinkClass[] => {
    const owner = `link ${text(l.a)} -- ${text(l.b)}`;
    const a = vertex('links', index, owner, l.a);
    const b = vertex('links', index, owner, l.b);
    for (const end of [a, b]) if (isLatticeProblem(end)) problems.push(end);
    if (isLatticeProblem(a) || isLatticeProblem(b)) return [];
    if (sameCell(a, b)) problems.push(fault('links', index, owner, `${owner} begins and ends at one vertex`));
    return [{ kind: 'links', labels: l.labels, a, b, position: centre([a, b], data, vertices) }];
  });
  if (problems.length > 0) return problems;

  const plaquettes = data.plaquettes.flatMap((p, index): PlaquetteClass[] => {
    const owner = `plaquette ${p.labels[0] ?? String(index + 1)}`;
    const corners = p.corners.map((c) => vertex('plaquettes', index, owner, c));
    const bad = corners.filter(isLatticeProblem);
    const good = corners.filter((c): c is Cell => !isLatticeProblem(c));
    if (good.length < 3 && bad.length === 0)
      bad.push(fault('plaquettes', index, owner, `${owner} needs at least three corners`));
    const rim =
      bad.length > 0
        ? []
        : good.flatMap((c, k) => {
            const next = (k + 1) % good.length;
            const found = linksBetween(links, c, good[next]!);
            if (found.length !== 1)
              bad.push(
                fault(
                  'plaquettes',
                  index,
                  owner,
                  `${owner}: corners ${text(p.corners[k]!)} and ${text(p.corners[next]!)} share ${found.length === 0 ? 'no link' : `${String(found.length)} links`}; consecutive corners share exactly one`,
                ),
              );
            return found.slice(0, 1);
          });
    if (bad.length === 0 && new Set(rim.map(cellKey)).size < rim.length)
      bad.push(fault('plaquettes', index, owner, `${owner} passes a link twice`));
    problems.push(...bad);
    return bad.length > 0
      ? []
      : [{ kind: 'plaquettes', labels: p.labels, corners: good, rim, position: centre(good, data, vertices) }];
  });
  if (problems.length > 0) return problems;

  const face = resolver('plaquettes', group(data.plaquettes), dimension);
  const cubes = data.cubes.flatMap((c, index): CubeClass[] => {
    const owner = `cube ${c.labels[0] ?? String(index + 1)}`;
    const faces = c.faces.map((f) => face('cubes', index, owner, f));
    const bad = faces.filter(isLatticeProblem);
    const good = faces.filter((f): f is Cell => !isLatticeProblem(f));
    const around = good.flatMap((f) => plaquettes[f.index]!.rim.map((l) => shifted(l, f.offset)));
    const open = oddCells(around);
    if (bad.length === 0 && (open.length > 0 || good.length < 2))
      bad.push(
        fault(
          'cubes',
          index,
          owner,
          `${owner} is not closed: every edge lies in an even number of its faces, ${String(open.length)} do not`,
        ),
      );
    problems.push(...bad);
    const edges = [...new Map(around.map((l) => [cellKey(l), l])).values()];
    return bad.length > 0
      ? []
      : [{ kind: 'cubes', labels: c.labels, faces: good, edges, position: centre(good, data, plaquettes) }];
  });
  return problems.length > 0
    ? problems
    : { name: data.name, dimension, vectors: data.vectors, vertices, links, plaquettes, cubes };
}
