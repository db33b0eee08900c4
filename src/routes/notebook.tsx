import { useQuery } from '@tanstack/react-query';
import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import { Link, useNavigate, useParams } from 'react-router-dom';
import type { Notebook } from '../../shared/contracts/notebooks.ts';
import { useLive } from '../api/live.ts';
import { meQuery, notebookQuery } from '../api/queries.ts';
import { Waiting } from '../components/faces.tsx';
import { Colophon, type ColophonPart, sourceAddress } from '../features/colophon/colophon.tsx';
import type { Command } from '../features/commands/commands.ts';
import { useCommands } from '../features/commands/context.ts';
import { type Margin, useMargin } from '../features/margin/margin.tsx';
import { Present } from '../features/margin/present.tsx';
import type { EntryText } from '../features/spread/entry.tsx';
import { titleOf } from '../features/spread/rows.ts';
import { useRows } from '../features/spread/useRows.ts';
import { type Drafts, savingInWords, textOf } from '../features/writing/drafts.ts';
import { SourceFoot } from '../features/writing/foot.tsx';
import { TwoTexts } from '../features/writing/two-texts.tsx';
import { useEntries } from '../features/writing/useEntries.ts';
import { useHolding } from '../features/writing/useHolding.ts';
import { useSaving } from '../features/writing/useSaving.ts';
import { HandOverContext } from '../features/jobs/open-questions.tsx';
import { useAnswers, useHandOver, useLearned } from '../features/jobs/useAnswers.ts';
import { useReading } from '../reading/useReading.ts';
import { useDesk } from './desk.tsx';
import { Facing } from './facing.tsx';
import { NotFetched } from './not-found.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** A notebook as it is read and written. */
export function NotebookPage() {
  const { notebook = '' } = useParams();
  const me = useQuery(meQuery());
  const asked = useQuery(notebookQuery(notebook));
  if (asked.isPending || me.isPending)
    return (
      <Sheet title="Notebook">
        <Waiting what="Opening the notebook …" />
      </Sheet>
    );
  if (!asked.data)
    return (
      <NotFetched what="The notebook could not be opened." error={asked.error} retry={() => void asked.refetch()} />
    );
  return <Opened key={notebook} notebook={asked.data} me={me.data?.person?.id ?? null} />;
}

/** Entries as this writer sees them; one that did not change stays the same value. */
function useTexts(notebook: Notebook, drafts: Parameters<typeof textOf>[0]): readonly EntryText[] {
  return useMemo(
    () => notebook.entries.map((entry) => ({ id: entry.id, kind: entry.kind, text: textOf(drafts, entry) })),
    [notebook.entries, drafts],
  );
}

/** The same list while ids, kinds and texts are the same, whatever else of the notebook changed. */
function useSame(entries: readonly EntryText[]): readonly EntryText[] {
  const [kept, setKept] = useState(entries);
  if (kept === entries) return kept;
  const same = (a: EntryText | undefined, b: EntryText | undefined) =>
    a !== undefined && b !== undefined && a.id === b.id && a.kind === b.kind && a.text === b.text;
  if (kept.length === entries.length && entries.every((entry, k) => same(entry, kept[k]))) return kept;
  const known = new Map(kept.map((entry) => [entry.id, entry]));
  const next = entries.map((entry) => {
    const old = known.get(entry.id);
    return old && same(old, entry) ? old : entry;
  });
  setKept(next);
  return next;
}

function Opened({ notebook, me }: { notebook: Notebook; me: string | null }) {
  const navigate = useNavigate();
  const may = notebook.may.includes('edit');
  const saving = useSaving(notebook.id, notebook.entries, may);
  const entries = useSame(useTexts(notebook, saving.drafts));
  const [learned, learn] = useLearned();
  const reading = useReading(entries, learned);
  useAnswers(reading.slices, learn);
  const handOver = useHandOver(notebook.id, entries, me);
  const rows = useRows(reading.slices);
  const changes = useEntries(notebook);
  const present = useLive(notebook.id, me);
  const [part, setPart] = useState<ColophonPart | null>(null);
  const margin = useMargin({
    notebook: notebook.id,
    entries,
    slices: reading.slices,
    me,
    may: notebook.may.includes('remark'),
  });
  const { type, flush, choose } = saving;

  const onType = useCallback(
    (id: string, text: string) => {
      const entry = notebook.entries.find((one) => one.id === id);
      if (entry) type(entry, text);
    },
    [notebook.entries, type],
  );
  const place = (id: string) => entries.findIndex((one) => one.id === id);
  const insert = async (kind: EntryText['kind'], before: string | null) => {
    const made = await changes.insert(kind, before);
    if (made !== null) desk.open({ entry: made, line: 0, column: 1 });
  };
  const write = useWriting(notebook, (before) => changes.insert('statements', before), type);
  const { drafts } = saving;
  const settled = useSettled(drafts.size, flush);
  const remove = async (id: string) => {
    desk.close();
    // What was typed last is saved first, so that undoing the deletion brings all of it back.
    await settled().catch(() => undefined);
    await changes.remove(id);
    choose(id, 'theirs');
  };
  const desk = useDesk({
    entries,
    reading,
    rows,
    onType,
    onLeave: flush,
    foot: (entry) => (
      <SourceFoot
        draft={saving.drafts.get(entry.id)}
        choose={(which) => choose(entry.id, which)}
        first={place(entry.id) === 0}
        last={place(entry.id) === entries.length - 1}
        acts={{
          move: (way) => void changes.move(entry.id, way),
          remove: () => void remove(entry.id),
          insertAfter: (kind) => void insert(kind, entries[place(entry.id) + 1]?.id ?? null),
        }}
      />
    ),
  });
  useHolding(notebook.id, may ? desk.writing : null);

  const now = useNow();
  const heldBy = useMemo(() => {
    const others = notebook.entries.flatMap(({ id, hold }) =>
      hold && hold.by.id !== me && new Date(hold.until).getTime() > now ? [[id, hold.by.name] as const] : [],
    );
    return new Map(others);
  }, [notebook.entries, me, now]);

  useCommands(() =>
    commandsOf({
      notebook,
      entries,
      changes,
      insert,
      open: desk.open,
      show: setPart,
      margin,
      go: (to) => void navigate(to),
    }),
  );
  const edits = may
    ? { open: desk.open, insert: (kind: EntryText['kind'], before: string | null) => void insert(kind, before) }
    : undefined;

  return (
    <HandOverContext value={handOver}>
      <Facing
        hand={desk.hand}
        entries={entries}
        reading={reading}
        rows={rows}
        writing={desk.writing}
        source={desk.source}
        edits={edits}
        write={may ? write : undefined}
        heldBy={heldBy}
        head={<Head notebook={notebook} saving={may ? savingInWords(saving.drafts) : null} />}
        margin={margin}
        strip={
          <Present
            others={present.filter((person) => person.id !== me)}
            writing={notebook.entries.flatMap(({ hold }, k) => (hold ? [[hold.by.id, k + 1] as const] : []))}
          />
        }
        foot={
          <>
            {entries.length === 0 && may && <FirstEntry />}
            <Orphans drafts={drafts} entries={entries} drop={(id) => choose(id, 'theirs')} />
            <p role="status" className="label min-h-6">
              {changes.removed && (
                <>
                  Entry ({changes.removed.number}) is deleted.{' '}
                  <button type="button" className="act" onClick={() => void changes.restore()}>
                    undo
                  </button>
                </>
              )}
              {changes.failed !== null && <span className="ink-refuted"> {changes.failed}</span>}
            </p>
            <Colophon
              notebook={notebook}
              part={part}
              show={setPart}
              settle={settled}
              ways={{
                edition: (number) => paths.edition.to(notebook.id, number),
                shared: paths.shared.to,
                editions: paths.editions.to(notebook.id),
                collation: paths.collation.to(notebook.id),
                variants: paths.variants.to(notebook.id),
                toNotebook: (id) => void navigate(paths.notebook.to(id)),
                toShelf: () => void navigate(paths.shelf.to()),
                link: (to, words) => <Link to={to}>{words}</Link>,
              }}
            />
          </>
        }
      />
    </HandOverContext>
  );
}

/** Writes a text into a new entry at the end: the entry is made first, and the text typed once the notebook has it. */
function useWriting(
  notebook: Notebook,
  insert: (before: null) => Promise<string | null>,
  type: (entry: Notebook['entries'][number], text: string) => void,
): (text: string) => void {
  const [made, setMade] = useState<{ readonly id: string; readonly text: string } | null>(null);
  const typed = useRef<string | null>(null);
  const entry = made && notebook.entries.find((one) => one.id === made.id);
  useEffect(() => {
    if (!entry || !made || typed.current === made.id) return;
    typed.current = made.id;
    type(entry, made.text);
  }, [entry, made, type]);
  return (text) =>
    void insert(null).then((id) => {
      if (id !== null) setMade({ id, text });
    });
}

/** The time, to ten seconds: holds run out without anyone saying so. */
function useNow(): number {
  const [now, setNow] = useState(() => Date.now());
  useEffect(() => {
    const timer = setInterval(() => setNow(Date.now()), 10_000);
    return () => clearInterval(timer);
  }, []);
  return now;
}

function Head({ notebook, saving }: { notebook: Notebook; saving: string | null }) {
  const { edition, origin } = notebook;
  return (
    <>
      <title>{`${notebook.title} · Gaugewright`}</title>
      <h1>{notebook.title}</h1>
      <p className="byline label">
        <span>{notebook.authors.length > 0 ? notebook.authors.join(', ') : notebook.owner.name}</span>
        <span>{edition === null ? 'draft, no edition yet' : `draft after edition ${String(edition)}`}</span>
        {origin && (
          <span>
            fork of <Link to={paths.notebook.to(origin.notebook)}>{origin.title}</Link>
          </span>
        )}
        {saving !== null ? (
          <span role="status" data-saving={saving}>
            {saving}
          </span>
        ) : (
          <span>open to read</span>
        )}
      </p>
    </>
  );
}

/** Texts whose entry someone else deleted meanwhile: kept until the writer lets them go. */
function Orphans(props: { drafts: Drafts; entries: readonly EntryText[]; drop: (id: string) => void }) {
  const there = new Set(props.entries.map((entry) => entry.id));
  const orphans = [...props.drafts].filter(([id, draft]) => !there.has(id) && draft.state !== 'sending');
  return orphans.map(([id, draft]) => (
    <TwoTexts key={id} draft={{ ...draft, theirs: null }} choose={() => props.drop(id)} />
  ));
}

function FirstEntry() {
  return (
    <div className="measure space-y-3 py-6">
      <p>
        Nothing is written here yet. A derivation begins with its lattice and its spins; then a model, a map to the
        other language, and audits of what is claimed:
      </p>
      <pre className="code">{`lattice square torus 4 x 4\nspins s on vertices\nmodel ising = - sum(l: links) s^z[l.a] s^z[l.b]`}</pre>
    </div>
  );
}

/** Sends what is typed and resolves when all of it is saved; rejects after ten seconds, so that no edition lacks a word. */
function useSettled(unsaved: number, flush: () => void): () => Promise<void> {
  const count = useRef(unsaved);
  useEffect(() => {
    count.current = unsaved;
  }, [unsaved]);
  return useCallback(async () => {
    flush();
    for (let waited = 0; count.current > 0; waited += 100) {
      if (waited >= 10_000) throw new Error('Not all of the text is saved yet; the edition was not made.');
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
  }, [flush]);
}

interface CommandsGiven {
  readonly notebook: Notebook;
  readonly entries: readonly EntryText[];
  readonly changes: ReturnType<typeof useEntries>;
  readonly insert: (kind: EntryText['kind'], before: string | null) => Promise<void>;
  readonly open: (spot: { entry: string; line: number; column: number }) => void;
  readonly show: (part: ColophonPart) => void;
  readonly margin: Margin;
  readonly go: (to: string) => void;
}

/** What the keyboard's line offers on a notebook. */
function commandsOf(given: CommandsGiven): readonly Command[] {
  const { notebook, entries, changes, insert, open, show, margin, go } = given;
  const can = new Set(notebook.may);
  const part = (words: string, name: ColophonPart, also = ''): Command => ({
    words,
    also,
    run: () => {
      show(name);
      document.getElementById('colophon')?.scrollIntoView({ block: 'center' });
      requestAnimationFrame(() =>
        document.querySelector<HTMLElement>('.colophon-part :is(input, select, button)')?.focus(),
      );
    },
  });
  const goTo = entries.map((entry, k) => ({
    words: `go to (${String(k + 1)}) ${titleOf(entry)}`,
    run: () => {
      const there = document.getElementById(`entry-${String(k + 1)}`);
      there?.scrollIntoView({ block: 'start' });
      (there?.querySelector<HTMLElement>('[data-term]') ?? there)?.focus({ preventScroll: true });
    },
  }));
  const writeIn = entries.map((entry, k) => ({
    words: `write in (${String(k + 1)}) ${titleOf(entry)}`,
    also: 'open edit source',
    run: () => open({ entry: entry.id, line: 0, column: 1 }),
  }));
  const remarkOn = entries.map((entry, k) => ({
    words: `remark on (${String(k + 1)}) ${titleOf(entry)}`,
    also: 'margin comment',
    run: () => margin.begin(entry.id),
  }));
  const writing = [
    { words: 'add statements at the end', run: () => void insert('statements', null) },
    { words: 'add prose at the end', run: () => void insert('prose', null) },
    ...(changes.removed
      ? [{ words: 'undo the last deletion', also: 'restore', run: () => void changes.restore() }]
      : []),
    part('change title and authors', 'title', 'rename'),
    ...writeIn,
  ];
  return [
    ...(can.has('publish') ? [part('publish an edition', 'publish', 'seal')] : []),
    ...(can.has('link') ? [part('share an edition by link', 'share')] : []),
    part('people and rights', 'people', 'coauthors referees invite visibility'),
    ...(can.has('export') ? [{ words: 'export .gw', run: () => location.assign(sourceAddress(notebook.id)) }] : []),
    ...(can.has('edit') ? writing : []),
    { words: 'next remark', also: 'margin', run: () => margin.go('next') },
    { words: 'previous remark', also: 'margin', run: () => margin.go('previous') },
    ...(can.has('remark') ? remarkOn : []),
    { words: 'go to the editions', also: 'history compare', run: () => go(paths.editions.to(notebook.id)) },
    ...(can.has('adopt')
      ? [{ words: 'go to the variants', also: 'collation', run: () => go(paths.variants.to(notebook.id)) }]
      : []),
    ...goTo,
  ];
}
