import { useEffect, useId, useMemo, useRef, useState } from 'react';
import { type Command, matching } from './commands.ts';

/**
 * The keyboard's line, at the foot of the page: type a few words of what is to be done or found. Opened by Control or
 * Command with the semicolon, or by its name in the top line.
 */
export function CommandLine({ commands, close }: { commands: readonly Command[] | null; close: () => void }) {
  const open = commands !== null;
  const dialog = useRef<HTMLDialogElement>(null);
  useEffect(() => {
    const element = dialog.current;
    if (open && element && !element.open) element.showModal();
    if (!open && element?.open) element.close();
  }, [open]);
  return (
    <dialog
      ref={dialog}
      className="command-line"
      aria-label="What is to be done?"
      onClose={close}
      onClick={(event) => {
        if (event.target === event.currentTarget) close();
      }}
    >
      {commands && <Line commands={commands} close={close} />}
    </dialog>
  );
}

function Line({ commands, close }: { commands: readonly Command[]; close: () => void }) {
  const [typed, setTyped] = useState('');
  const [at, setAt] = useState(0);
  const list = useId();
  const found = useMemo(() => matching(commands, typed).slice(0, 40), [commands, typed]);
  const run = (command: Command | undefined) => {
    if (!command) return;
    close();
    command.run();
  };
  return (
    <>
      <label className="label" htmlFor={`${list}-input`}>
        What is to be done, or where to?
      </label>
      <input
        id={`${list}-input`}
        className="field text-lead"
        role="combobox"
        aria-expanded="true"
        aria-controls={list}
        aria-activedescendant={found[at] ? `${list}-${String(at)}` : undefined}
        autoComplete="off"
        autoFocus
        value={typed}
        onChange={(event) => {
          setTyped(event.target.value);
          setAt(0);
        }}
        onKeyDown={(event) => {
          if (event.key === 'Enter') run(found[at]);
          else if (event.key === 'ArrowDown') setAt((now) => Math.min(now + 1, found.length - 1));
          else if (event.key === 'ArrowUp') setAt((now) => Math.max(now - 1, 0));
          else return;
          event.preventDefault();
        }}
      />
      <ul id={list} role="listbox" aria-label="What can be done" className="command-options">
        {found.map((command, k) => (
          <li
            key={command.words}
            id={`${list}-${String(k)}`}
            role="option"
            aria-selected={k === at}
            onPointerMove={() => setAt(k)}
            onClick={() => run(command)}
          >
            {command.words}
          </li>
        ))}
      </ul>
      {found.length === 0 && (
        <p className="label" role="status">
          Nothing here is called that.
        </p>
      )}
    </>
  );
}
