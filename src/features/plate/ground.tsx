import type { LatticeFamily } from '../../../shared/lattice/drawing.ts';
import { declaredWindow, isOpen, type Window } from './frame.ts';
import type { PlateLattice } from './supports.ts';
import type { Projection } from './view.ts';

/** What lies under the marks: one unit cell, and the edges of the declared lattice, joined or open. */

interface Props {
  readonly family: LatticeFamily;
  readonly lattice: PlateLattice;
  readonly window: Window;
  readonly project: Projection;
  readonly scale: number;
}

type Place = readonly [x: number, y: number];

/** Corners of the parallelogram from `low` to `high` in the plane of directions 1 and 2, in unit cells, in order around it. */
export function corners(
  family: LatticeFamily,
  low: readonly [number, number],
  high: readonly [number, number],
  project: Projection,
): readonly Place[] {
  const at = (a: number, b: number): Place => {
    const [first = [], second = []] = family.vectors;
    const [x, y] = project(first.map((c, k) => a * c + b * (second[k] ?? 0)));
    return [x, -y];
  };
  return [at(low[0], low[1]), at(high[0], low[1]), at(high[0], high[1]), at(low[0], high[1])];
}

const path = (points: readonly Place[]): string =>
  points.map(([x, y], k) => `${k === 0 ? 'M' : 'L'}${x.toFixed(4)} ${y.toFixed(4)}`).join('');

export function Ground({ family, lattice, window, project, scale }: Props) {
  if (family.dimension === 3) return <UnitBox family={family} project={project} scale={scale} />;
  if (family.dimension === 1) {
    const [end = 1] = family.vectors[0] ?? [];
    return <line x1={0} x2={end} y1={0} y2={0} stroke="var(--answer)" strokeWidth={14 / scale} />;
  }
  return (
    <>
      <path d={`${path(corners(family, [0, 0], [1, 1], project))}Z`} fill="var(--answer)" />
      <Edges {...{ family, lattice, window, project, scale }} />
    </>
  );
}

/** The unit cell of three dimensions by its twelve edges. */
function UnitBox({ family, project, scale }: { family: LatticeFamily; project: Projection; scale: number }) {
  const vertex = (bits: number): Place => {
    const position = family.vectors.reduce<readonly number[]>(
      (sum, vector, d) => ((bits >> d) & 1 ? vector.map((c, k) => c + (sum[k] ?? 0)) : sum),
      [0, 0, 0],
    );
    const [x, y] = project(position);
    return [x, -y];
  };
  const edges = [0, 1, 2].flatMap((d) =>
    [0, 1, 2, 3, 4, 5, 6, 7]
      .filter((bits) => !((bits >> d) & 1))
      .map((bits) => [vertex(bits), vertex(bits | (1 << d))]),
  );
  return <path d={edges.map(path).join('')} stroke="var(--answer)" strokeWidth={7 / scale} fill="none" />;
}

/**
 * The edges of the declared lattice, where all of it is drawn: those of a torus that are one and the same carry the same
 * number of strokes; an open edge is a plain line.
 */
function Edges({ family, lattice, window, project, scale }: Props) {
  const declared = declaredWindow(lattice);
  const [one, two] = declared ?? [];
  if (!one || !two || window.some(([low, high], d) => low > 0 || high < (declared?.[d]?.[1] ?? 0))) return null;
  const low = (d: number) => (isOpen(lattice, d) ? -0.3 : -0.5);
  const high = (d: number, last: number) => (isOpen(lattice, d) ? last + 0.3 : last + 0.5);
  const [a, b, c, d] = corners(family, [low(0), low(1)], [high(0, one[1]), high(1, two[1])], project);
  if (!a || !b || !c || !d) return null;
  const sides: readonly (readonly [Place, Place, number])[] = [
    [a, d, 0],
    [b, c, 0],
    [a, b, 1],
    [d, c, 1],
  ];
  return (
    <g stroke="var(--quiet)" fill="none" strokeWidth={1 / scale}>
      {sides.map(([from, to, direction], k) => {
        const open = isOpen(lattice, direction);
        return (
          <g key={k}>
            <path
              d={path([from, to])}
              strokeDasharray={open ? undefined : `${String(5 / scale)} ${String(3 / scale)}`}
            />
            {!open && <Strokes from={from} to={to} count={direction + 1} scale={scale} />}
          </g>
        );
      })}
    </g>
  );
}

/** Short strokes across the middle of an edge. */
function Strokes({ from, to, count, scale }: { from: Place; to: Place; count: number; scale: number }) {
  const [dx, dy] = [to[0] - from[0], to[1] - from[1]];
  const length = Math.hypot(dx, dy) || 1;
  const [ux, uy] = [dx / length, dy / length];
  const half = 4 / scale;
  return Array.from({ length: count }, (_, k) => {
    const along = length / 2 + ((k - (count - 1) / 2) * 4) / scale;
    const [x, y] = [from[0] + ux * along, from[1] + uy * along];
    return <line key={k} x1={x - uy * half} y1={y + ux * half} x2={x + uy * half} y2={y - ux * half} />;
  });
}
