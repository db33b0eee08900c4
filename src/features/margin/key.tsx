import type { Slice } from '../../reading/slices.ts';
import { GradeMark, type GradeName, PauliMark } from '../../components/marks.tsx';

const meanings: Readonly<Record<GradeName, string>> = {
  proved: 'decided for every size that the claim names',
  exact: 'decided by exact arithmetic on the sizes listed',
  numerical: 'agreed to a tolerance on the sizes listed',
  refuted: 'a witness shows that it fails',
  open: 'not decided; the claim says why',
};

/** The key in the margin: the marks that this notebook uses, and what they mean. */
export function Key({ slices }: { slices: readonly Slice[] }) {
  const grades = new Set(slices.flatMap((slice) => slice.claims.map((item) => item.value.grade)));
  const used = (Object.keys(meanings) as GradeName[]).filter((grade) => grades.has(grade));
  const terms = slices.some((slice) => slice.models.length > 0);
  if (used.length === 0 && !terms) return null;
  return (
    <section className="key" aria-label="Key to the marks">
      <h2 className="head">Key</h2>
      <dl className="space-y-2">
        {used.map((grade) => (
          <div key={grade} className="grid grid-cols-[1.25rem_1fr]">
            <dt className={`ink-${grade}`}>
              <GradeMark grade={grade} label={grade} />
            </dt>
            <dd>
              <span className={`ink-${grade}`}>{grade}</span>: {meanings[grade]}
            </dd>
          </div>
        ))}
        {terms &&
          (['x', 'y', 'z'] as const).map((pauli) => (
            <div key={pauli} className="grid grid-cols-[1.25rem_1fr]">
              <dt>
                <PauliMark pauli={pauli} />
              </dt>
              <dd className={`ink-${pauli}`}>operator {pauli.toUpperCase()}</dd>
            </div>
          ))}
      </dl>
    </section>
  );
}
