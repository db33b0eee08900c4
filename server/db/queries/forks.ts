import { and, asc, eq, isNull } from 'drizzle-orm';
import type { Asking } from '../connection.ts';
import { entries, notebooks } from '../schema/notebooks.ts';
import { type ForkBase, forkBases } from '../schema/reviews.ts';
import type { NotebookStanding } from '../standing.ts';

export type { ForkBase };

export interface Reading {
  readonly title: string;
  readonly authors: readonly string[];
  readonly entries: readonly { readonly id: string; readonly kind: 'prose' | 'statements'; readonly text: string }[];
}

/** The working text alone, with the ids of its entries. */
export async function getWorkingText({ db }: Asking, standing: NotebookStanding): Promise<Reading> {
  const [head] = await db
    .select({ title: notebooks.title, authors: notebooks.authors })
    .from(notebooks)
    .where(eq(notebooks.id, standing.on.notebook));
  const rows = await db
    .select({ id: entries.id, kind: entries.kind, text: entries.text })
    .from(entries)
    .where(and(eq(entries.notebook, standing.on.notebook), isNull(entries.deletedAt)))
    .orderBy(asc(entries.position));
  return { title: head?.title ?? '', authors: head?.authors ?? [], entries: rows };
}

export interface Origin {
  readonly notebook: string;
  readonly edition: number | null;
  readonly base: ForkBase;
}

/** Where a fork came from and what it began with; null for what is no fork, or whose origin is gone. */
export async function findOrigin({ db }: Asking, standing: NotebookStanding): Promise<Origin | null> {
  const [row] = await db
    .select({ notebook: notebooks.originNotebook, edition: notebooks.originEdition, base: forkBases.base })
    .from(notebooks)
    .innerJoin(forkBases, eq(forkBases.notebook, notebooks.id))
    .where(eq(notebooks.id, standing.on.notebook));
  return row?.notebook == null ? null : { ...row, notebook: row.notebook };
}

/** Keeps what a fork begins with. */
export async function insertForkBase({ db }: Asking, notebook: string, base: ForkBase): Promise<void> {
  await db.insert(forkBases).values({ notebook, base });
}
