import { Sentence } from '../../components/formula.tsx';
import { GradeMark } from '../../components/marks.tsx';
import type { Slice } from '../../reading/slices.ts';

/** What is on paper only: the line to cite by, and all claims in one table. */

/** What is printed above the title: what this is and how to find it again. */
export function CoverLine({ words }: { words: string }) {
  return <p className="on-paper cover-line label">{words}</p>;
}

interface Props {
  readonly slices: readonly Slice[];
  /** A claim's sentence as the page prints it. */
  readonly printed: (sentence: string) => string;
}

/** Every claim with its entry's number and its grade, at the end of what is printed. */
export function TableOfClaims({ slices, printed }: Props) {
  const claims = slices.flatMap((slice, k) => slice.claims.map((item) => ({ number: k + 1, claim: item.value })));
  if (claims.length === 0) return null;
  return (
    <section className="on-paper claims-on-paper" aria-label="Claims">
      <h2>Claims</h2>
      <table className="ledger">
        <thead>
          <tr>
            <th scope="col" className="label">
              entry
            </th>
            <th scope="col" className="label">
              claim
            </th>
            <th scope="col" className="label">
              grade
            </th>
          </tr>
        </thead>
        <tbody>
          {claims.map(({ number, claim }, k) => (
            <tr key={k}>
              <td>({number})</td>
              <td>
                <Sentence text={printed(claim.tex)} />
              </td>
              <td className={`ink-${claim.grade}`}>
                <GradeMark grade={claim.grade} label="" /> {claim.grade}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  );
}
