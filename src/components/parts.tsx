import { type InputHTMLAttributes, type ReactNode, useId } from 'react';

/** Parts that forms and lists have in common. */

type FieldProps = Omit<InputHTMLAttributes<HTMLInputElement>, 'onChange' | 'value' | 'id'> & {
  readonly label: ReactNode;
  readonly value: string;
  readonly set: (value: string) => void;
  /** What the field takes, in a few words under it. */
  readonly hint?: string;
};

/** A line to write on, with its label above. */
export function Field({ label, value, set, hint, className, ...rest }: FieldProps) {
  const id = useId();
  return (
    <p className={className}>
      <label className="label" htmlFor={id}>
        {label}
      </label>
      <input
        {...rest}
        id={id}
        className="field"
        value={value}
        aria-describedby={hint === undefined ? undefined : `${id}-hint`}
        onChange={(event) => set(event.target.value)}
      />
      {hint !== undefined && (
        <span className="label block" id={`${id}-hint`}>
          {hint}
        </span>
      )}
    </p>
  );
}

interface TextFieldProps {
  readonly label: ReactNode;
  readonly value: string;
  readonly set: (value: string) => void;
  readonly rows?: number;
  readonly focus?: boolean;
}

/** Several lines to write on. */
export function TextField({ label, value, set, rows = 3, focus = false }: TextFieldProps) {
  const id = useId();
  return (
    <p>
      <label className="label" htmlFor={id}>
        {label}
      </label>
      <textarea
        id={id}
        className="field text-field"
        rows={rows}
        autoFocus={focus}
        value={value}
        onChange={(event) => set(event.target.value)}
      />
    </p>
  );
}

interface ChoiceProps<T extends string> {
  readonly label: string;
  readonly value: T;
  readonly options: readonly (readonly [T, string])[];
  readonly choose: (value: T) => void;
  /** The label is for screen readers only, where the words around say it. */
  readonly quiet?: boolean;
}

/** One of a few words. */
export function Choice<T extends string>({ label, value, options, choose, quiet = false }: ChoiceProps<T>) {
  const id = useId();
  return (
    <span className="choice">
      <label htmlFor={id} className={quiet ? 'aside-only' : 'label'}>
        {label}
      </label>
      <select
        id={id}
        className="field w-auto"
        value={value}
        onChange={(event) => {
          const chosen = options.find(([one]) => one === event.target.value);
          if (chosen) choose(chosen[0]);
        }}
      >
        {options.map(([one, words]) => (
          <option key={one} value={one}>
            {words}
          </option>
        ))}
      </select>
    </span>
  );
}

/** A part of a page under a hairline, with its heading. */
export function Part({ title, children, id }: { title: string; children: ReactNode; id?: string }) {
  const heading = useId();
  return (
    <section className="part" aria-labelledby={heading} id={id}>
      <h2 id={heading}>{title}</h2>
      {children}
    </section>
  );
}

interface More {
  readonly hasNextPage: boolean;
  readonly isFetchingNextPage: boolean;
  readonly fetchNextPage: () => unknown;
}

/** The rest of a list that is fetched page by page. */
export function ShowMore({ of }: { of: More }) {
  if (!of.hasNextPage) return null;
  return (
    <button type="button" className="act mt-4" disabled={of.isFetchingNextPage} onClick={() => void of.fetchNextPage()}>
      show more
    </button>
  );
}
