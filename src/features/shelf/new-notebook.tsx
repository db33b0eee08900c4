import { useId, useState } from 'react';

interface Props {
  readonly create: (title: string) => Promise<void>;
  /** Makes a notebook of a `.gw` file's text; the name stands in where the text has no title. */
  readonly take: (source: string, name: string) => Promise<void>;
}

/** Begins a notebook: by its title, or from a file of the operator language. */
export function NewNotebook({ create, take }: Props) {
  const [title, setTitle] = useState('');
  const [busy, setBusy] = useState(false);
  const [failed, setFailed] = useState<string | null>(null);
  const field = useId();
  const attempt = async (make: () => Promise<void>) => {
    setBusy(true);
    setFailed(null);
    try {
      await make();
    } catch (error) {
      setFailed(error instanceof Error ? error.message : 'The notebook was not made.');
    } finally {
      setBusy(false);
    }
  };
  return (
    <form
      className="mt-6"
      onSubmit={(event) => {
        event.preventDefault();
        if (title.trim() !== '') void attempt(() => create(title.trim()));
      }}
    >
      <label className="label" htmlFor={field}>
        Title of a new notebook
      </label>
      <div className="flex flex-wrap items-baseline gap-x-6 gap-y-2">
        <input
          id={field}
          className="field max-w-md flex-1"
          maxLength={200}
          value={title}
          onChange={(event) => setTitle(event.target.value)}
        />
        <button type="submit" className="act" disabled={busy || title.trim() === ''}>
          begin it
        </button>
        <label className="act relative cursor-pointer">
          from a .gw file
          <input
            type="file"
            accept=".gw,text/plain"
            className="absolute inset-0 w-full cursor-pointer opacity-0"
            disabled={busy}
            onChange={(event) => {
              const file = event.target.files?.[0];
              event.target.value = '';
              if (file) void attempt(async () => take(await file.text(), file.name));
            }}
          />
        </label>
      </div>
      {failed !== null && (
        <p role="alert" className="ink-refuted mt-2">
          {failed}
        </p>
      )}
    </form>
  );
}
