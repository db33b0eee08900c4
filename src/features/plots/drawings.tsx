import { Axes, number, scaleOf, sizeWords, spaced } from './axes.tsx';
import { type Ground, type LevelsOnSize, multipletsOf, type Scan } from './data.ts';

/** Plots as plain SVG: levels beside levels, lines, ground multiplets. Each draws into a box from 0, 0. */

const panel = { width: 268, height: 232 };

/** Panels beside one another: three, on a narrow page one, so that their letters keep their size. */
export const panelsAcross = (narrow: boolean): number => (narrow ? 1 : 3);
const line = 58;

/** Width and height of the panels of several sizes. */
export const panelsBox = (count: number, across: number): { width: number; height: number } => ({
  width: panel.width * Math.min(count, across),
  height: panel.height * Math.ceil(count / across),
});

const shortName = (name: string): string => (name.length > 17 ? `${name.slice(0, 16)}…` : name);

/** One size: levels of both models, joined where they agree, in the ink of a refutation where they do not. */
export function LevelsPanel({ levels, place, across }: { levels: LevelsOnSize; place: number; across: number }) {
  const { left, right, names, size } = levels;
  const frame = { left: 56, right: panel.width - 14, top: 30, bottom: panel.height - 28 };
  const y = scaleOf([...left, ...right], [frame.bottom, frame.top]);
  const tolerance = 1e-7 * Math.max(1, ...left.map(Math.abs), ...right.map(Math.abs));
  const [a, b] = [frame.left + 26, frame.right - 26];
  const pairs = new Map<string, { from: number; to: number; agree: boolean }>();
  left.slice(0, right.length).forEach((from, k) => {
    const to = right[k] ?? from;
    pairs.set(`${from.toPrecision(9)} ${to.toPrecision(9)}`, { from, to, agree: Math.abs(from - to) <= tolerance });
  });
  const x = (place % across) * panel.width;
  const top = Math.floor(place / across) * panel.height;
  return (
    <g transform={`translate(${String(x)} ${String(top)})`}>
      <Axes frame={frame} y={y} yWords="energy / unit of the couplings" />
      {[...pairs].map(([key, { from, to, agree }]) => (
        <line
          key={key}
          x1={a + line}
          x2={b - line}
          y1={y(from)}
          y2={y(to)}
          stroke={agree ? 'var(--numerical)' : 'var(--refuted)'}
          strokeWidth={agree ? 1 : 1.5}
          strokeDasharray={agree ? '1 3' : undefined}
        />
      ))}
      <Column levels={left} y={y} from={a} side="start" />
      <Column levels={right} y={y} from={b - line} side="end" />
      <g fill="var(--ink)" className="plot-names">
        <text x={a + line / 2} y={frame.bottom + 18} textAnchor="middle">
          <title>{names[0]}</title>
          {shortName(names[0])}
        </text>
        <text x={b - line / 2} y={frame.bottom + 18} textAnchor="middle">
          <title>{names[1]}</title>
          {shortName(names[1])}
        </text>
        <text x={(a + b) / 2} y={16} textAnchor="middle">
          {sizeWords(size)}
        </text>
      </g>
    </g>
  );
}

interface ColumnProps {
  readonly levels: readonly number[];
  readonly y: (energy: number) => number;
  readonly from: number;
  readonly side: 'start' | 'end';
}

/** Levels of one model; a multiplet is one line with its number beside it, where there is room for it. */
function Column({ levels, y, from, side }: ColumnProps) {
  let last = Infinity;
  return multipletsOf(levels).map(({ energy, count }) => {
    const at = y(energy);
    const room = last - at > 9;
    const labelled = count > 1 && room;
    if (labelled) last = at;
    return (
      <g key={energy}>
        <line x1={from} x2={from + line} y1={at} y2={at} stroke="var(--ink)" strokeWidth={count > 1 ? 2 : 1.25} />
        {labelled && (
          <text
            className="plot-numbers"
            fill="var(--quiet)"
            x={side === 'start' ? from - 3 : from + line + 3}
            y={at}
            textAnchor={side === 'start' ? 'end' : 'start'}
            dominantBaseline="central"
          >
            ×{count}
          </text>
        )}
      </g>
    );
  });
}

export const lines = { width: 520, height: 264 };
const dashes = [undefined, '6 3', '2 3', '8 3 2 3', '1 2'];
const inks = ['var(--numerical)', 'var(--x)', 'var(--y)', 'var(--z)', 'var(--ink)'];

/** In what unit a scanned quantity is measured. */
export const unitOf = (quantity: string): string =>
  quantity === 'gap' || quantity === 'energy' ? `${quantity} / unit of the couplings` : quantity;

/** A quantity over one coupling: one line for each size, told apart by dashes and by the size at its end. */
export function ScanLines({ scans }: { scans: readonly Scan[] }) {
  const frame = { left: 66, right: lines.width - 64, top: 14, bottom: lines.height - 40 };
  const known = scans.map(({ size, points }) => ({
    size,
    points: points.flatMap(({ at, value }) => (value === null ? [] : [{ x: at[0] ?? 0, y: value }])),
  }));
  const all = known.flatMap(({ points }) => points);
  if (all.length === 0) return null;
  const x = scaleOf(
    all.map((point) => point.x),
    [frame.left, frame.right],
    true,
  );
  const y = scaleOf(
    all.map((point) => point.y),
    [frame.bottom, frame.top],
  );
  const ends = spaced(
    known.map(({ points }) => y(points.at(-1)?.y ?? 0)),
    12,
  );
  return (
    <>
      <Axes frame={frame} x={x} y={y} xWords={scans[0]?.moving[0] ?? ''} yWords={unitOf(scans[0]?.quantity ?? '')} />
      {known.map(({ size, points }, k) => (
        <g key={size}>
          <polyline
            points={points.map((point) => `${x(point.x).toFixed(2)},${y(point.y).toFixed(2)}`).join(' ')}
            fill="none"
            stroke={inks[k % inks.length]}
            strokeWidth={1.5}
            strokeDasharray={dashes[k % dashes.length]}
          />
          {points.map((point) => (
            <circle key={point.x} cx={x(point.x)} cy={y(point.y)} r={1.9} fill={inks[k % inks.length]} />
          ))}
          {points.length > 0 && (
            <text
              className="plot-names"
              x={frame.right + 8}
              y={ends[k]}
              dominantBaseline="central"
              fill={inks[k % inks.length]}
            >
              {sizeWords(size)}
            </text>
          )}
        </g>
      ))}
    </>
  );
}

export const grounds = { width: 380, height: 232 };

/** Ground multiplet and the next level for each size, energies from the ground level. */
export function Grounds({ all }: { all: readonly Ground[] }) {
  const frame = { left: 66, right: grounds.width - 10, top: 22, bottom: grounds.height - 30 };
  const y = scaleOf([0, ...all.map(({ gap }) => gap ?? 0)], [frame.bottom - 6, frame.top]);
  const step = (frame.right - frame.left) / all.length;
  return (
    <>
      <Axes frame={frame} y={y} yWords="above the ground / unit of the couplings" />
      {all.map(({ size, degeneracy, gap }, k) => {
        const from = frame.left + step * k + step * 0.15;
        const to = frame.left + step * (k + 1) - step * 0.15;
        return (
          <g key={size}>
            <line x1={from} x2={to} y1={y(0)} y2={y(0)} stroke="var(--ink)" strokeWidth={2} />
            {gap !== null && <line x1={from} x2={to} y1={y(gap)} y2={y(gap)} stroke="var(--ink)" strokeWidth={1.25} />}
            <g className="plot-names" textAnchor="middle">
              <text x={(from + to) / 2} y={y(0) - 5} fill="var(--ink)">
                ×{degeneracy}
              </text>
              {gap !== null && y(0) - y(gap) > 26 && (
                <text x={(from + to) / 2} y={y(gap) - 5} fill="var(--quiet)">
                  {number(gap)}
                </text>
              )}
              <text x={(from + to) / 2} y={frame.bottom + 18} fill="var(--ink)">
                {sizeWords(size)}
              </text>
            </g>
          </g>
        );
      })}
    </>
  );
}
