import { Axes, number, scaleOf, sizeWords } from './axes.tsx';
import type { Scan } from './data.ts';
import { unitOf } from './drawings.tsx';
import { contour, type Grid, gridOf, largestOf, steepness } from './grid.ts';

/** A quantity over two couplings: deeper ink for larger values, and the contour where it changes fastest. */

export const heat = { width: 470, height: 330 };

/** The contour stands at this part of the largest change. */
export const contourAt = 0.5;

/** Borders between neighbouring places, and half a step beyond the ends. */
function borders(places: readonly number[]): readonly number[] {
  const [first = 0, last = 0] = [places[0], places.at(-1)];
  const step = (k: number) => ((places[k + 1] ?? 0) - (places[k] ?? 0)) / 2;
  const inner = places.slice(1).map((place, k) => (place + (places[k] ?? 0)) / 2);
  return [first - step(0), ...inner, last + step(places.length - 2)];
}

/** Where the quantity changes fastest, and by how much from end to end of the scan. */
export const steepest = (scan: Scan) => largestOf(steepness(gridOf(scan)));

const deepest = 0.92;

export function HeatMap({ scan }: { scan: Scan }) {
  const grid = gridOf(scan);
  const frame = { left: 66, right: heat.width - 96, top: 24, bottom: heat.height - 44 };
  const [bx, by] = [borders(grid.xs), borders(grid.ys)];
  const x = scaleOf(bx, [frame.left, frame.right], true);
  const y = scaleOf(by, [frame.bottom, frame.top], true);
  const known = grid.values.flat().filter((value) => value !== null);
  const [low, high] = [Math.min(...known), Math.max(...known)];
  const depth = (value: number) => 0.06 + (deepest - 0.06) * (high === low ? 0.5 : (value - low) / (high - low));
  return (
    <>
      {grid.values.map((row, j) =>
        row.map((value, i) => {
          const [x0, x1] = [x(bx[i] ?? 0), x(bx[i + 1] ?? 0)];
          const [y0, y1] = [y(by[j] ?? 0), y(by[j + 1] ?? 0)];
          const box = { x: Math.min(x0, x1), y: Math.min(y0, y1), width: Math.abs(x1 - x0), height: Math.abs(y1 - y0) };
          return value === null ? (
            <path
              key={`${String(i)} ${String(j)}`}
              d={`M${String(box.x)} ${String(box.y)} l${String(box.width)} ${String(box.height)}`}
              stroke="var(--hair)"
            />
          ) : (
            <rect key={`${String(i)} ${String(j)}`} {...box} fill="var(--numerical)" fillOpacity={depth(value)}>
              <title>{`${scan.moving[0] ?? ''} = ${number(grid.xs[i] ?? 0)}, ${scan.moving[1] ?? ''} = ${number(grid.ys[j] ?? 0)}: ${number(value)}`}</title>
            </rect>
          );
        }),
      )}
      <Contour grid={grid} x={x} y={y} />
      <Axes frame={frame} x={x} y={y} xWords={scan.moving[0]} yWords={scan.moving[1] ?? ''} />
      <text className="plot-names" fill="var(--ink)" x={(frame.left + frame.right) / 2} y={14} textAnchor="middle">
        {sizeWords(scan.size)}
      </text>
      <Depths low={low} high={high} depth={depth} at={frame.right + 22} words={unitOf(scan.quantity)} frame={frame} />
    </>
  );
}

function Contour({ grid, x, y }: { grid: Grid; x: (value: number) => number; y: (value: number) => number }) {
  const change = steepness(grid);
  const most = largestOf(change);
  if (!most || most.value === 0) return null;
  const path = contour(change, most.value * contourAt)
    .map(([[x0, y0], [x1, y1]]) => `M${x(x0).toFixed(2)} ${y(y0).toFixed(2)}L${x(x1).toFixed(2)} ${y(y1).toFixed(2)}`)
    .join('');
  const [cx, cy] = [x(most.x), y(most.y)];
  return (
    <g fill="none">
      {/* Paper under ink, so that the line is seen on any depth. */}
      <path d={path} stroke="var(--paper)" strokeWidth={4} />
      <path d={path} stroke="var(--ink)" strokeWidth={1.5} />
      <circle cx={cx} cy={cy} r={5} fill="var(--paper)" stroke="var(--ink)" strokeWidth={1.5} />
      <circle cx={cx} cy={cy} r={1.5} fill="var(--ink)" />
    </g>
  );
}

interface DepthsProps {
  readonly low: number;
  readonly high: number;
  readonly depth: (value: number) => number;
  readonly at: number;
  readonly words: string;
  readonly frame: { readonly top: number; readonly bottom: number };
}

/** The ladder of inks beside the map. */
function Depths({ low, high, depth, at, words, frame }: DepthsProps) {
  const steps = 16;
  const height = (frame.bottom - frame.top) / steps;
  return (
    <g className="plot-numbers" fill="var(--quiet)">
      {Array.from({ length: steps }, (_, k) => (
        <rect
          key={k}
          x={at}
          y={frame.bottom - (k + 1) * height}
          width={12}
          height={height}
          fill="var(--numerical)"
          fillOpacity={depth(low + ((high - low) * (k + 0.5)) / steps)}
        />
      ))}
      <text x={at + 16} y={frame.top + 5} dominantBaseline="central">
        {number(high)}
      </text>
      <text x={at + 16} y={frame.bottom - 5} dominantBaseline="central">
        {number(low)}
      </text>
      <text
        transform={`translate(${String(at + 26)} ${String((frame.top + frame.bottom) / 2)}) rotate(90)`}
        textAnchor="middle"
      >
        {words}
      </text>
    </g>
  );
}
