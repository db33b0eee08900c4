import { and, asc, count, desc, eq, isNull, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { SendingSummary, Variant } from '../../../shared/contracts/reviews.ts';
import type { Asking } from '../connection.ts';
import { type Page, type PageAsked, pageFrom, readCursor } from '../page.ts';
import { notFound } from '../refusal.ts';
import { notebooks } from '../schema/notebooks.ts';
import { people } from '../schema/people.ts';
import { sendings, variants } from '../schema/reviews.ts';
import type { NotebookStanding } from '../standing.ts';
import { personColumns } from './people.ts';

const origin = alias(notebooks, 'origin');
const fork = alias(notebooks, 'fork');

const counted = (what: 'adopted' | 'left' | null) => sql<number>`(select count(*)::int from ${variants}
  where ${variants.sending} = ${sendings.id} ${what === null ? sql`` : sql`and ${variants.decision} = ${what}`})`;

const columns = {
  id: sendings.id,
  letter: sendings.letter,
  by: personColumns,
  at: sendings.sentAt,
  withdrawnAt: sendings.withdrawnAt,
  origin: { id: origin.id, title: origin.title },
  fork: { id: fork.id, title: fork.title },
  edition: sendings.edition,
  variants: counted(null),
  adopted: counted('adopted'),
  left: counted('left'),
};

const select = ({ db }: Asking) =>
  db
    .select(columns)
    .from(sendings)
    .innerJoin(origin, eq(origin.id, sendings.origin))
    .leftJoin(fork, and(eq(fork.id, sendings.fork), isNull(fork.deletedAt)))
    .leftJoin(people, eq(people.id, sendings.sentBy))
    .$dynamic();

type Row = Awaited<ReturnType<typeof select>>[number];

function summaryOf({ withdrawnAt, at, ...row }: Row): SendingSummary {
  const decided = row.adopted + row.left === row.variants;
  const status = withdrawnAt !== null ? 'withdrawn' : decided ? 'closed' : 'waiting';
  return { ...row, at: at.toISOString(), status };
}

/** What came to a notebook, or was sent from it, newest first. */
export async function listSendings(
  asking: Asking,
  standing: NotebookStanding,
  { which, after, limit }: PageAsked & { readonly which: 'received' | 'sent' },
): Promise<Page<SendingSummary>> {
  const from = readCursor(after);
  const older =
    from === null
      ? undefined
      : sql`(${sendings.sentAt}, ${sendings.id}) < (${from.at.toISOString()}::timestamptz, ${from.id}::uuid)`;
  const here = eq(which === 'received' ? sendings.origin : sendings.fork, standing.on.notebook);
  const rows = await select(asking)
    .where(and(here, older))
    .orderBy(desc(sendings.sentAt), desc(sendings.id))
    .limit(limit + 1);
  return pageFrom(rows, limit, ({ at, id }) => ({ at, id }), summaryOf);
}

/** A sending that came to the notebook or went from it. Throws `not-found`. */
export async function getSending(asking: Asking, standing: NotebookStanding, id: string): Promise<SendingSummary> {
  const { notebook } = standing.on;
  const here = sql`(${sendings.origin} = ${notebook} or ${sendings.fork} = ${notebook})`;
  const [row] = await select(asking).where(and(eq(sendings.id, id), here));
  if (row === undefined) throw notFound();
  return summaryOf(row);
}

export type VariantRow = Pick<
  Variant,
  'id' | 'kind' | 'entryKind' | 'entry' | 'after' | 'base' | 'fork' | 'decision'
> & {
  /** The origin's reading when it was decided. */
  readonly displaced: string | null;
};

/** The variants of a sending that getSending gave, in their order. */
export async function listVariants({ db }: Asking, sending: string): Promise<VariantRow[]> {
  const rows = await db
    .select({
      id: variants.id,
      kind: variants.kind,
      entryKind: variants.entryKind,
      entry: variants.entry,
      after: variants.after,
      base: variants.base,
      fork: variants.fork,
      displaced: variants.displaced,
      what: variants.decision,
      reason: variants.reason,
      by: personColumns,
      at: variants.decidedAt,
      text: variants.adopted,
    })
    .from(variants)
    .leftJoin(people, eq(people.id, variants.decidedBy))
    .where(eq(variants.sending, sending))
    .orderBy(asc(variants.ordinal));
  return rows.map(({ what, reason, by, at, text, ...row }) => ({
    ...row,
    decision: what === null || at === null ? null : { what, reason: reason ?? '', by, at: at.toISOString(), text },
  }));
}

export interface NewSending {
  readonly origin: string;
  readonly edition: number | null;
  readonly letter: string;
  readonly variants: readonly Pick<Variant, 'kind' | 'entryKind' | 'entry' | 'after' | 'base' | 'fork'>[];
}

/** Keeps what is sent from a fork; returns its id. Runs in a transaction. */
export async function insertSending({ db }: Asking, standing: NotebookStanding, sent: NewSending): Promise<string> {
  const { origin: to, edition, letter } = sent;
  const [row] = await db
    .insert(sendings)
    .values({ origin: to, fork: standing.on.notebook, edition, letter, sentBy: standing.person })
    .returning({ id: sendings.id });
  if (row === undefined) throw new Error('variants were sent and are not there');
  await db.insert(variants).values(
    sent.variants.map(({ kind, entryKind, entry, after, base, fork: reading }, ordinal) => ({
      ...{ kind, entryKind, entry, after, base },
      fork: reading,
      sending: row.id,
      ordinal,
    })),
  );
  return row.id;
}

/** How many sendings of a fork wait to be decided. */
export async function countWaiting({ db }: Asking, standing: NotebookStanding): Promise<number> {
  const [row] = await db
    .select({ waiting: count() })
    .from(sendings)
    .where(
      and(
        eq(sendings.fork, standing.on.notebook),
        isNull(sendings.withdrawnAt),
        sql`exists (select 1 from ${variants} where ${variants.sending} = ${sendings.id} and ${variants.decision} is null)`,
      ),
    );
  return row?.waiting ?? 0;
}

/** Takes a sending back, from the fork; false if there is none to take back. */
export async function withdrawSending({ db }: Asking, standing: NotebookStanding, id: string): Promise<boolean> {
  const { rowCount } = await db
    .update(sendings)
    .set({ withdrawnAt: sql`now()` })
    .where(and(eq(sendings.id, id), eq(sendings.fork, standing.on.notebook), isNull(sendings.withdrawnAt)));
  return rowCount === 1;
}

export interface Decided {
  readonly decision: 'adopted' | 'left';
  readonly reason: string;
  readonly displaced: string | null;
  readonly adopted: string | null;
}

/** Decides a variant that was not decided; false if it was. */
export async function decideVariant(
  { db }: Asking,
  standing: NotebookStanding,
  id: string,
  decided: Decided,
): Promise<boolean> {
  const { rowCount } = await db
    .update(variants)
    .set({ ...decided, decidedBy: standing.person, decidedAt: sql`now()` })
    .where(and(eq(variants.id, id), isNull(variants.decision)));
  return rowCount === 1;
}
