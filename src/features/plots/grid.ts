import type { Scan } from './data.ts';

/** A scan over two couplings as a grid, and the contour about its steepest places. */

export interface Grid {
  readonly xs: readonly number[];
  readonly ys: readonly number[];
  /** values[j][i] at xs[i], ys[j]; null where there is none. */
  readonly values: readonly (readonly (number | null)[])[];
}

export function gridOf(scan: Scan): Grid {
  const axis = (d: number) => [...new Set(scan.points.map((point) => point.at[d] ?? 0))].sort((a, b) => a - b);
  const [xs, ys] = [axis(0), axis(1)];
  const known = new Map(scan.points.map(({ at, value }) => [at.join(' '), value]));
  return { xs, ys, values: ys.map((y) => xs.map((x) => known.get(`${String(x)} ${String(y)}`) ?? null)) };
}

/** Derivative of values over places at k: central inside, one-sided at the ends and beside gaps; null without a neighbour. */
function slope(places: readonly number[], values: readonly (number | null)[], k: number): number | null {
  const own = values[k] ?? null;
  if (own === null) return null;
  const before = k > 0 ? (values[k - 1] ?? null) : null;
  const after = values[k + 1] ?? null;
  const [low, high] = [before === null ? k : k - 1, after === null ? k : k + 1];
  if (low === high) return null;
  return ((after ?? own) - (before ?? own)) / ((places[high] ?? 0) - (places[low] ?? 0));
}

/**
 * How fast the value changes at each point of the grid: the length of its gradient, each coupling measured in the range
 * it is scanned over, so that the choice of units does not turn the contour. Null where it is not known.
 */
export function steepness({ xs, ys, values }: Grid): Grid {
  const range = (axis: readonly number[]) => (axis.at(-1) ?? 0) - (axis[0] ?? 0) || 1;
  const [width, height] = [range(xs), range(ys)];
  return {
    xs,
    ys,
    values: values.map((row, j) =>
      row.map((_, i) => {
        const dx = slope(xs, row, i);
        const column = values.map((other) => other[i] ?? null);
        const dy = slope(ys, column, j);
        return dx === null || dy === null ? null : Math.hypot(dx * width, dy * height);
      }),
    ),
  };
}

export type Segment = readonly [readonly [number, number], readonly [number, number]];

/**
 * The contour of a grid at a level, as segments: marching squares with linear interpolation; the two saddle cases are
 * told apart by the mean of the corners. Squares with an unknown corner are left out.
 */
export function contour({ xs, ys, values }: Grid, level: number): readonly Segment[] {
  const segments: Segment[] = [];
  for (let j = 0; j + 1 < ys.length; j += 1)
    for (let i = 0; i + 1 < xs.length; i += 1) {
      const corners = [values[j]?.[i], values[j]?.[i + 1], values[j + 1]?.[i + 1], values[j + 1]?.[i]];
      const [a, b, c, d] = corners;
      if (a == null || b == null || c == null || d == null) continue;
      const [x0 = 0, x1 = 0, y0 = 0, y1 = 0] = [xs[i], xs[i + 1], ys[j], ys[j + 1]];
      const part = (from: number, to: number) => (level - from) / (to - from);
      // Crossings of the four sides in order: below, right, above, left.
      const sides: (readonly [number, number] | null)[] = [
        a >= level !== b >= level ? [x0 + (x1 - x0) * part(a, b), y0] : null,
        b >= level !== c >= level ? [x1, y0 + (y1 - y0) * part(b, c)] : null,
        d >= level !== c >= level ? [x0 + (x1 - x0) * part(d, c), y1] : null,
        a >= level !== d >= level ? [x0, y0 + (y1 - y0) * part(a, d)] : null,
      ];
      const [below, right, above, left] = sides;
      if (below && right && above && left) {
        const joined = (a + b + c + d) / 4 >= level === a >= level;
        segments.push(
          ...(joined
            ? ([
                [below, right],
                [above, left],
              ] as const)
            : ([
                [below, left],
                [above, right],
              ] as const)),
        );
        continue;
      }
      const [p, q] = sides.filter((side) => side != null);
      if (p && q) segments.push([p, q]);
    }
  return segments;
}

/** The largest value of a grid and where it stands; null when nothing is known. */
export function largestOf({
  xs,
  ys,
  values,
}: Grid): { readonly x: number; readonly y: number; readonly value: number } | null {
  let best: { x: number; y: number; value: number } | null = null;
  values.forEach((row, j) =>
    row.forEach((value, i) => {
      if (value !== null && (!best || value > best.value)) best = { x: xs[i] ?? 0, y: ys[j] ?? 0, value };
    }),
  );
  return best;
}
