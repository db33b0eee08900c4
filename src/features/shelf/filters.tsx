import { grades } from '../../../shared/contracts/report.ts';
import { mapKinds } from '../../../shared/contracts/reviews.ts';
import { Choice, Field } from '../../components/parts.tsx';

/** What narrows a list of notebooks; an empty word narrows nothing. */
export interface Narrowed {
  readonly q: string;
  readonly lattice: string;
  readonly map: string;
  readonly grade: string;
}

export const everything: Narrowed = { q: '', lattice: '', map: '', grade: '' };
export const narrows = (narrowed: Narrowed): boolean => Object.values(narrowed).some((value: string) => value !== '');

const lattices = ['chain', 'square', 'triangular', 'honeycomb', 'kagome', 'cubic', 'custom'];
const any = ['', 'any'] as const;
const mapWords: Readonly<Record<(typeof mapKinds)[number], string>> = {
  dictionary: 'dictionary',
  gauging: 'gauging a symmetry',
  circuit: 'Clifford circuit',
  solving: 'solving a law',
  states: 'state map',
  composition: 'composition or inverse',
};

/** The query of the server for what is chosen here. */
export function queryOf({ q, lattice, map, grade }: Narrowed) {
  const kind = mapKinds.find((one) => one === map);
  const sealed = grades.find((one) => one === grade);
  return {
    q: q.trim(),
    ...(lattice === '' ? {} : { lattice }),
    ...(kind === undefined ? {} : { map: kind }),
    ...(sealed === undefined ? {} : { grade: sealed }),
  };
}

interface Props {
  readonly label: string;
  readonly narrowed: Narrowed;
  readonly set: (narrowed: Narrowed) => void;
  readonly children?: React.ReactNode;
}

/** Finds notebooks by their words, and narrows by lattice, kind of map and grade. */
export function Filters({ label, narrowed, set, children }: Props) {
  return (
    <search className="mt-8 block">
      <Field
        label={label}
        type="search"
        value={narrowed.q}
        set={(q) => set({ ...narrowed, q })}
        hint="Words of titles, prose, names and operators; quotation marks keep words together."
      />
      <p className="colophon-line mt-2">
        <Choice
          label="lattice"
          value={narrowed.lattice}
          options={[any, ...lattices.map((one) => [one, one] as const)]}
          choose={(lattice) => set({ ...narrowed, lattice })}
        />
        <Choice
          label="map"
          value={narrowed.map}
          options={[any, ...mapKinds.map((one) => [one, mapWords[one]] as const)]}
          choose={(map) => set({ ...narrowed, map })}
        />
        <Choice
          label="with a claim that is"
          value={narrowed.grade}
          options={[any, ...grades.map((one) => [one, one] as const)]}
          choose={(grade) => set({ ...narrowed, grade })}
        />
        {children}
      </p>
    </search>
  );
}
