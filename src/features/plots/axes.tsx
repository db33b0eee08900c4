import { scaleLinear } from 'd3-scale';

/** Axes in the page's own hand: hairlines, few ticks, the quantity with its unit. */

export type Scale = ReturnType<typeof scaleOf>;

export interface Frame {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

/** A linear scale over values with a little room at both ends; a single value gets room around it. */
export function scaleOf(values: readonly number[], range: readonly [number, number], tight = false) {
  const low = Math.min(...values);
  const high = Math.max(...values);
  const room = low === high ? Math.max(1, Math.abs(low)) / 2 : tight ? 0 : (high - low) * 0.05;
  return scaleLinear()
    .domain([low - room, high + room])
    .range([...range]);
}

const sign = (text: string): string => text.replace('-', '−');

interface AxesProps {
  readonly frame: Frame;
  readonly x?: Scale | undefined;
  readonly y: Scale;
  readonly xWords?: string | undefined;
  readonly yWords: string;
}

export function Axes({ frame, x, y, xWords, yWords }: AxesProps) {
  const { left, right, top, bottom } = frame;
  const yTicks = y.ticks(5);
  const xTicks = x?.ticks(6) ?? [];
  const yText = y.tickFormat(5);
  const xText = x?.tickFormat(6);
  return (
    <g className="plot-axes">
      <g stroke="var(--quiet)" strokeWidth={1}>
        <line x1={left} x2={left} y1={top} y2={bottom} />
        {x && <line x1={left} x2={right} y1={bottom} y2={bottom} />}
        {yTicks.map((tick) => (
          <line key={tick} x1={left - 4} x2={left} y1={y(tick)} y2={y(tick)} />
        ))}
        {xTicks.map((tick) => (
          <line key={tick} x1={x?.(tick)} x2={x?.(tick)} y1={bottom} y2={bottom + 4} />
        ))}
      </g>
      <g fill="var(--quiet)" className="plot-numbers">
        {yTicks.map((tick) => (
          <text key={tick} x={left - 7} y={y(tick)} textAnchor="end" dominantBaseline="central">
            {sign(yText(tick))}
          </text>
        ))}
        {xTicks.map((tick) => (
          <text key={tick} x={x?.(tick)} y={bottom + 15} textAnchor="middle">
            {sign(xText?.(tick) ?? '')}
          </text>
        ))}
        <text transform={`translate(11 ${String((top + bottom) / 2)}) rotate(-90)`} textAnchor="middle">
          {yWords}
        </text>
        {xWords !== undefined && (
          <text x={(left + right) / 2} y={bottom + 31} textAnchor="middle">
            {xWords}
          </text>
        )}
      </g>
    </g>
  );
}

/** Places on a line for labels, moved apart to at least `least`, keeping their order; as near to the wanted places as that allows downwards. */
export function spaced(wanted: readonly number[], least: number): readonly number[] {
  const order = wanted.map((_, k) => k).sort((a, b) => (wanted[a] ?? 0) - (wanted[b] ?? 0));
  const placed = [...wanted];
  let last = -Infinity;
  for (const k of order) {
    last = Math.max(wanted[k] ?? 0, last + least);
    placed[k] = last;
  }
  return placed;
}

export const sizeWords = (size: string): string => size.replace(/ x /g, ' × ');
export const number = (value: number): string => sign(String(Number(value.toPrecision(6))));
