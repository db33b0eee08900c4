import { useId, useState } from 'react';
import type { Preview } from '../../../shared/contracts/reviews.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Field } from '../../components/parts.tsx';
import { Previewed } from './previewed.tsx';

interface Props {
  readonly create: (title: string) => Promise<void>;
  /** What a file would become; nothing is stored. */
  readonly preview: (source: string) => Promise<Preview>;
  /** Makes a notebook of a file's text, under this title. */
  readonly take: (source: string, title: string) => Promise<void>;
}

interface Shown {
  readonly source: string;
  readonly name: string;
  readonly preview: Preview;
}

const titleOfFile = (name: string): string =>
  name
    .replace(/\.\w+$/, '')
    .replace(/[-_]+/g, ' ')
    .trim();

/** Begins a notebook: by its title, or from a file, which is shown as it would become before anything is stored. */
export function NewNotebook({ create, preview, take }: Props) {
  const [title, setTitle] = useState('');
  const [file, setFile] = useState<File | null>(null);
  const [shown, setShown] = useState<Shown | null>(null);
  const field = useId();
  const begin = useAttempt(() => create(title.trim()));
  const look = async (chosen: File) => {
    const source = await chosen.text();
    setShown({ source, name: chosen.name, preview: await preview(source) });
  };
  const [looking, setLooking] = useState(false);
  const [failed, setFailed] = useState<string | null>(null);
  const choose = async (chosen: File) => {
    setFile(chosen);
    setShown(null);
    setFailed(null);
    setLooking(true);
    try {
      await look(chosen);
    } catch (error) {
      setFailed(error instanceof Error ? error.message : 'The file could not be read.');
    } finally {
      setLooking(false);
    }
  };
  return (
    <>
      <form
        className="mt-6"
        onSubmit={(event) => {
          event.preventDefault();
          if (title.trim() !== '') begin.run();
        }}
      >
        <div className="flex flex-wrap items-end gap-x-6 gap-y-2">
          <Field
            label="Title of a new notebook"
            className="max-w-md flex-1"
            maxLength={200}
            value={title}
            set={setTitle}
          />
          <button type="submit" className="act" disabled={begin.busy || title.trim() === ''}>
            begin it
          </button>
          <label className="act relative cursor-pointer" htmlFor={field}>
            from a file
            <input
              id={field}
              type="file"
              accept=".gw,.json,.csv,text/plain,application/json,text/csv"
              className="absolute inset-0 w-full cursor-pointer opacity-0"
              disabled={looking}
              onChange={(event) => {
                const chosen = event.target.files?.[0];
                event.target.value = '';
                if (chosen) void choose(chosen);
              }}
            />
          </label>
        </div>
        <p className="label mt-1">Files: the operator language (.gw), JSON of this product, Pauli strings as CSV.</p>
        <Attempt of={begin} />
        {failed !== null && (
          <p role="alert" className="ink-refuted mt-2">
            {file?.name}: {failed}
          </p>
        )}
      </form>
      <p role="status" className="label">
        {looking && `Reading ${file?.name ?? 'the file'} …`}
      </p>
      {shown && (
        <Previewed
          key={shown.source}
          preview={shown.preview}
          name={shown.name}
          title={titleOfFile(shown.name)}
          take={(wanted) => take(shown.source, wanted)}
          leave={() => setShown(null)}
        />
      )}
    </>
  );
}
