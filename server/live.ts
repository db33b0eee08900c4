import { randomUUID } from 'node:crypto';
import pg from 'pg';
import { type Announcement, announce, channel, type Word } from './db/announce.ts';
import type { Database } from './db/connection.ts';
import { membersOf } from './db/queries/notices.ts';
import { clearStale, listPresent, sayGone, sayPresent } from './db/queries/presences.ts';
import { askerFor, may, type NotebookStanding, standingOnNotebook } from './db/standing.ts';

/** How often an open connection says that it is there, and whether it may still listen is asked again. */
const renewMs = 25_000;
const longestPauseMs = 10_000;
/** Changes of a notebook within this time are one change of a shelf. */
const shelfMs = 1_000;

/** Where a listener's events go; `end` is called when it may not listen any more, or the server stops. */
export interface Listener {
  readonly send: (event: Announcement['event'] | Word['event'], data: unknown) => void;
  readonly end: () => void;
}

/** From NOTIFY in the database to the people who look at a notebook, whichever process serves them. */
export interface Live {
  /** Listens until the function that it resolves with is called. Members of the notebook count as present meanwhile. */
  readonly listen: (standing: NotebookStanding, listener: Listener) => Promise<() => Promise<void>>;
  /** Listens for what concerns a person, until the function that it returns is called or the account is closed. */
  readonly listenFor: (person: string, listener: Listener) => () => void;
  readonly close: () => Promise<void>;
}

interface Ear {
  /** Takes the ear away and tells the others; done once, however often it is called. */
  readonly leave: () => Promise<void>;
  standing: NotebookStanding;
  readonly connection: string;
  readonly listener: Listener;
}

const isMember = ({ person, on }: NotebookStanding): boolean => person !== null && on.role !== null;

export function openLive(database: Database, onTrouble: (error: unknown) => void): Live {
  const ears = new Map<string, Set<Ear>>();
  const persons = new Map<string, Set<Listener>>();
  const shelves = new Map<string, NodeJS.Timeout>();
  const quietly = (work: Promise<unknown>): void => void work.catch(onTrouble);
  const all = (): Ear[] => [...ears.values()].flatMap((set) => [...set]);

  const tellPresent = async (notebook: string): Promise<void> => {
    const present = { people: await listPresent(database, notebook) };
    for (const ear of ears.get(notebook) ?? []) if (isMember(ear.standing)) ear.listener.send('present', present);
  };

  /** Ends a listener that may not read any more; true if it still may. */
  const ask = async (ear: Ear): Promise<boolean> => {
    const standing = await standingOnNotebook(database, ear.standing, ear.standing.on.notebook);
    if (standing === null || !may(standing, 'read')) {
      ear.listener.end();
      return false;
    }
    ear.standing = standing;
    return true;
  };

  /** Tells the members of a notebook, wherever they are, that it looks different on their shelves. */
  const tellShelves = async (notebook: string): Promise<void> => {
    for (const person of await membersOf(database, notebook)) {
      for (const listener of persons.get(person) ?? []) listener.send('shelf', { notebook });
    }
  };
  const noteForShelves = (notebook: string): void => {
    if (persons.size === 0 || shelves.has(notebook)) return;
    const later = (): void => {
      shelves.delete(notebook);
      quietly(tellShelves(notebook));
    };
    shelves.set(notebook, setTimeout(later, shelfMs));
  };

  const pass = async ({ notebook, event, data }: Announcement): Promise<void> => {
    if (event === 'present') return tellPresent(notebook);
    if (event !== 'hold') noteForShelves(notebook);
    for (const ear of [...(ears.get(notebook) ?? [])]) {
      // Rights may be what changed, so they are asked before anything is said.
      if (event !== 'notebook' || (await ask(ear))) ear.listener.send(event, data);
    }
  };

  const passTo = async ({ person, event, data }: Word): Promise<void> => {
    const listeners = persons.get(person);
    if (listeners === undefined) return;
    const open = event !== 'account' || (await askerFor(database, person)) !== null;
    for (const listener of [...listeners]) {
      if (open) listener.send(event, data);
      else listener.end();
    }
  };

  const radio = listenForever(database.url, {
    heard: (said) => quietly('person' in said ? passTo(said) : pass(said)),
    // What was said while nobody listened is lost: everyone reads again.
    again: () => {
      for (const ear of all()) ear.listener.send('notebook', {});
      for (const listener of [...persons.values()].flatMap((set) => [...set])) listener.send('account', {});
    },
    onTrouble,
  });

  const renew = setInterval(() => {
    for (const ear of all()) {
      const { connection, standing } = ear;
      const { person, on } = standing;
      quietly(ask(ear));
      if (isMember(standing) && person !== null) {
        quietly(sayPresent(database, { connection, notebook: on.notebook, person }));
      }
    }
    quietly(clearStale(database));
  }, renewMs);
  renew.unref();

  return {
    listen: async (standing, listener) => {
      const { person, on } = standing;
      const connection = randomUUID();
      const present = isMember(standing) && person !== null;
      const set = ears.get(on.notebook) ?? new Set<Ear>();
      const leave = async (): Promise<void> => {
        set.delete(ear);
        if (set.size === 0 && ears.get(on.notebook) === set) ears.delete(on.notebook);
        if (!present) return;
        await sayGone(database, connection);
        await announce(database, on.notebook, 'present', null);
      };
      const ear: Ear = { standing, connection, listener, leave: once(leave) };
      ears.set(on.notebook, set.add(ear));
      if (!present) return ear.leave;
      try {
        await sayPresent(database, { connection, notebook: on.notebook, person });
        await announce(database, on.notebook, 'present', null);
      } catch (error) {
        await ear.leave().catch(() => undefined);
        throw error;
      }
      return ear.leave;
    },
    listenFor: (person, listener) => {
      const set = persons.get(person) ?? new Set<Listener>();
      persons.set(person, set.add(listener));
      return () => {
        set.delete(listener);
        if (set.size === 0 && persons.get(person) === set) persons.delete(person);
      };
    },
    close: async () => {
      clearInterval(renew);
      for (const timer of shelves.values()) clearTimeout(timer);
      for (const listener of [...persons.values()].flatMap((set) => [...set])) listener.end();
      // Those who listen leave while the database still answers.
      await Promise.allSettled(all().map(endAndLeave));
      await radio.close();
    },
  };
}

function endAndLeave(ear: Ear): Promise<void> {
  ear.listener.end();
  return ear.leave();
}

/** The same promise for every call. */
function once(work: () => Promise<void>): () => Promise<void> {
  let begun: Promise<void> | undefined;
  return () => (begun ??= work());
}

interface Hearing {
  readonly heard: (said: Announcement | Word) => void;
  /** Called when the connection stands again after it broke. */
  readonly again: () => void;
  readonly onTrouble: (error: unknown) => void;
}

/** One connection that listens on the channel, and is opened anew when it breaks, a little later each time. */
function listenForever(connectionString: string, hearing: Hearing): { readonly close: () => Promise<void> } {
  let closed = false;
  let client: pg.Client | undefined;
  let timer: NodeJS.Timeout | undefined;

  const open = async (pauseMs: number, again: boolean): Promise<void> => {
    const own = new pg.Client({ connectionString, application_name: 'gaugewright live', keepAlive: true });
    client = own;
    let broken = false;
    const breaks = (error: unknown): void => {
      if (broken || closed) return;
      broken = true;
      hearing.onTrouble(error);
      own.end().catch(() => undefined);
      timer = setTimeout(() => void open(Math.min(2 * pauseMs, longestPauseMs), true), pauseMs);
    };
    own.on('error', breaks);
    own.on('end', () => breaks(new Error('the connection that listens for changes ended')));
    own.on('notification', ({ payload }) => {
      hearing.heard(JSON.parse(payload ?? '{}') as Announcement | Word);
    });
    try {
      await own.connect();
      await own.query(`LISTEN ${channel}`);
      if (again) hearing.again();
    } catch (error) {
      breaks(error);
    }
  };

  const first = open(200, false);
  return {
    close: async () => {
      closed = true;
      clearTimeout(timer);
      await first;
      await client?.end().catch(() => undefined);
    },
  };
}
