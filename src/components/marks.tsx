/** The marks of X, Y, Z and of the grades: a shape and an ink each, the same in gutter, claims, plate and key. */

export type Pauli = 'x' | 'y' | 'z';
export type GradeName = 'proved' | 'exact' | 'numerical' | 'refuted' | 'open';

/** Shapes in a square from −1 to 1; the plate draws the same ones. */
export function PauliShape({ pauli, paper = 'var(--paper)' }: { pauli: Pauli; paper?: string }) {
  if (pauli === 'x') return <rect x={-1} y={-0.3} width={2} height={0.6} fill="var(--x)" />;
  if (pauli === 'y') return <path d="M0 -1 L0.8 0 L0 1 L-0.8 0 Z" fill={paper} stroke="var(--y)" strokeWidth={0.24} />;
  return (
    <>
      <circle r={0.84} fill={paper} stroke="var(--z)" strokeWidth={0.24} />
      <circle r={0.24} fill="var(--z)" />
    </>
  );
}

/** The mark of an operator, as large as the small letters beside it. Says nothing to a screen reader unless named. */
export function PauliMark({ pauli, named = false }: { pauli: Pauli; named?: boolean }) {
  return (
    <svg
      viewBox="-1.1 -1.1 2.2 2.2"
      width="0.8em"
      height="0.8em"
      className="inline-block align-[-0.06em]"
      {...(named ? { role: 'img', 'aria-label': pauli.toUpperCase() } : { 'aria-hidden': true })}
    >
      <PauliShape pauli={pauli} />
    </svg>
  );
}

const gradeShapes: Readonly<Record<GradeName, React.ReactElement>> = {
  proved: <rect x={-0.75} y={-0.75} width={1.5} height={1.5} fill="currentColor" />,
  exact: <rect x={-0.7} y={-0.7} width={1.4} height={1.4} fill="none" stroke="currentColor" strokeWidth={0.26} />,
  numerical: (
    <g fill="none" stroke="currentColor" strokeWidth={0.28} strokeLinecap="round">
      <path d="M-0.9 -0.2 C-0.55 -0.85 -0.3 -0.6 0 -0.36 S0.6 0.05 0.9 -0.55" />
      <path d="M-0.9 0.55 C-0.55 -0.1 -0.3 0.15 0 0.39 S0.6 0.8 0.9 0.2" />
    </g>
  ),
  refuted: (
    <path d="M-0.8 -0.8 L0.8 0.8 M0.8 -0.8 L-0.8 0.8" stroke="currentColor" strokeWidth={0.42} strokeLinecap="square" />
  ),
  open: (
    <rect
      x={-0.7}
      y={-0.7}
      width={1.4}
      height={1.4}
      fill="none"
      stroke="currentColor"
      strokeWidth={0.26}
      strokeDasharray="0.28 0.28"
    />
  ),
};

/** The words of the grades, as a reader is told them. */
export const gradeWords: Readonly<Record<GradeName, string>> = {
  proved: 'proved',
  exact: 'exact on the sizes named',
  numerical: 'numerical, to the tolerance named',
  refuted: 'refuted',
  open: 'open',
};

/** The mark of a grade, named for a screen reader by `label` (its word when not given); empty where the word stands beside it. */
export function GradeMark({ grade, label, size = '0.68em' }: { grade: GradeName; label?: string; size?: string }) {
  return (
    <svg
      viewBox="-1.1 -1.1 2.2 2.2"
      width={size}
      height={size}
      {...(label === '' ? { 'aria-hidden': true } : { role: 'img', 'aria-label': label ?? grade })}
      className={`grade-mark inline-block shrink-0 ink-${grade}`}
    >
      {gradeShapes[grade]}
    </svg>
  );
}
