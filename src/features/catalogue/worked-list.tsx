import { useQuery } from '@tanstack/react-query';
import { type ReactNode, useId, useState } from 'react';
import { type Worked, workedHands, workedLattices, workedSymmetries } from '../../../shared/contracts/catalogue.ts';
import { workedListQuery } from '../../api/catalogue-queries.ts';
import { Failed, Waiting } from '../../components/faces.tsx';
import { offered, type Picked, picking, unpicked } from './picking.ts';

const lists = [
  ['hand', 'What you have in hand', workedHands],
  ['lattice', 'Lattice', workedLattices],
  ['symmetry', 'Symmetry', workedSymmetries],
] as const;

interface Props {
  readonly link: (name: string, title: string) => ReactNode;
  /** What can be done with a derivation from the list: copy it, or sign in to. */
  readonly acts: (worked: Worked) => ReactNode;
}

/** The worked derivations, picked by what one has in hand, by lattice and by symmetry. */
export function WorkedList({ link, acts }: Props) {
  const asked = useQuery(workedListQuery());
  const [picked, setPicked] = useState(unpicked);
  if (asked.isPending) return <Waiting what="Fetching the worked dualities …" />;
  if (asked.isError)
    return (
      <Failed
        what="The worked dualities could not be fetched."
        error={asked.error}
        retry={() => void asked.refetch()}
      />
    );
  const all = asked.data.items;
  const found = picking(all, picked);
  return (
    <>
      <h2 className="mt-8">Worked dualities</h2>
      <Picking all={all} picked={picked} set={setPicked} />
      <p className="label mt-2" role="status">
        {found.length === all.length
          ? `${String(all.length)} worked dualities`
          : `${String(found.length)} of ${String(all.length)}`}
      </p>
      <ol className="mt-4 list-none p-0">
        {found.map((one) => (
          <li key={one.name} className="border-t border-hair py-4">
            <h3 className="text-lead">{link(one.name, one.title)}</h3>
            <p className="measure mt-1">{one.shows}</p>
            <p className="label mt-1">{one.sources.map(({ citation }) => citation).join('; ')}</p>
            <p className="colophon-line label mt-1">
              <span>
                {one.lattice} · {one.symmetry === 'none' ? 'no symmetry' : one.symmetry}
              </span>
              {acts(one)}
            </p>
          </li>
        ))}
      </ol>
    </>
  );
}

function Picking({ all, picked, set }: { all: readonly Worked[]; picked: Picked; set: (picked: Picked) => void }) {
  const id = useId();
  return (
    <search className="colophon-line mt-4">
      {lists.map(([by, label, words]) => (
        <span key={by}>
          <label className="label" htmlFor={`${id}-${by}`}>
            {label}
          </label>{' '}
          <select
            id={`${id}-${by}`}
            className="field w-auto"
            value={picked[by]}
            onChange={(event) => set({ ...picked, [by]: event.target.value })}
          >
            <option value="">any</option>
            {offered(all, picked, by, words).map((word) => (
              <option key={word} value={word}>
                {word}
              </option>
            ))}
          </select>
        </span>
      ))}
    </search>
  );
}
