import type { Person } from '../../../shared/contracts/people.ts';

/** Who else has the notebook open, and who writes where. */
export function Present({
  others,
  writing,
}: {
  others: readonly Person[];
  writing: readonly (readonly [string, number])[];
}) {
  if (others.length === 0) return null;
  return (
    <section aria-label="Also here" className="mb-6">
      <h2 className="head">Also here</h2>
      <ul className="space-y-1">
        {others.map((person) => {
          const at = writing.find(([id]) => id === person.id)?.[1];
          return (
            <li key={person.id}>
              {person.name}
              {at !== undefined && `, writing in (${String(at)})`}
            </li>
          );
        })}
      </ul>
    </section>
  );
}
