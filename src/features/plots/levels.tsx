/** Levels of two models side by side, joined where they agree: what a spectrum audit found, drawn to scale. */
export function Levels({ left, right, label }: { left: readonly number[]; right: readonly number[]; label: string }) {
  const width = 220;
  const height = 96;
  const all = [...left, ...right];
  const low = Math.min(...all);
  const span = Math.max(...all) - low || 1;
  const y = (energy: number) => height - 6 - ((energy - low) / span) * (height - 12);
  const line = 72;
  return (
    <svg viewBox={`0 0 ${String(width)} ${String(height)}`} width={width} height={height} role="img" aria-label={label}>
      <g stroke="var(--ink)" strokeWidth={1.25}>
        {left.map((energy, k) => (
          <line key={`l${String(k)}`} x1={0} x2={line} y1={y(energy)} y2={y(energy)} />
        ))}
        {right.map((energy, k) => (
          <line key={`r${String(k)}`} x1={width - line} x2={width} y1={y(energy)} y2={y(energy)} />
        ))}
      </g>
      <g stroke="var(--numerical)" strokeWidth={1} strokeDasharray="1 3">
        {left.slice(0, right.length).map((energy, k) => (
          <line key={k} x1={line} x2={width - line} y1={y(energy)} y2={y(right[k] ?? energy)} />
        ))}
      </g>
    </svg>
  );
}
