import { and, desc, eq, isNull, sql } from 'drizzle-orm';
import type { Health, KeptJob, KeptPerson } from '../../../shared/contracts/steward.ts';
import type { Asking } from '../connection.ts';
import { type Page, type PageAsked, pageFrom, readCursor } from '../page.ts';
import { memberships, notebooks } from '../schema/notebooks.ts';
import { mails } from '../schema/notices.ts';
import { people, sessions } from '../schema/people.ts';
import { editions } from '../schema/work.ts';
import { personColumns } from './people.ts';

const keptColumns = {
  ...personColumns,
  email: people.email,
  affiliation: people.affiliation,
  steward: people.steward,
  suspendedAt: people.suspendedAt,
  since: people.createdAt,
  notebooks: sql<number>`(select count(*)::int from ${memberships}
    where ${memberships.person} = ${people.id} and ${memberships.role} = 'owner')`,
  sessions: sql<number>`(select count(*)::int from ${sessions}
    where (${sessions.sess} -> 'passport' ->> 'user') = ${people.id}::text and ${sessions.expire} > now())`,
};

type KeptRow = Omit<KeptPerson, 'suspendedAt' | 'since'> & { readonly suspendedAt: Date | null; readonly since: Date };

const keptOf = ({ suspendedAt, since, ...row }: KeptRow): KeptPerson => ({
  ...row,
  suspendedAt: suspendedAt?.toISOString() ?? null,
  since: since.toISOString(),
});

/** The people of the installation, newest first; every word of `q` stands in name, handle, address or affiliation. */
export async function listKeptPeople(
  { db }: Asking,
  { after, limit, q }: PageAsked & { readonly q: string },
): Promise<Page<KeptPerson>> {
  const from = readCursor(after);
  const older =
    from === null
      ? undefined
      : sql`(${people.createdAt}, ${people.id}) < (${from.at.toISOString()}::timestamptz, ${from.id}::uuid)`;
  const text = sql`concat_ws(' ', ${people.name}, ${people.handle}, ${people.email}, ${people.affiliation})`;
  const words = q.split(/\s+/).filter((word) => word !== '');
  const found = words.map((word) => sql`${text} ilike ${`%${word.replace(/[\\%_]/g, '\\$&')}%`}`);
  const rows = await db
    .select(keptColumns)
    .from(people)
    .where(and(isNull(people.deletedAt), older, ...found))
    .orderBy(desc(people.createdAt), desc(people.id))
    .limit(limit + 1);
  return pageFrom(rows, limit, ({ since, id }) => ({ at: since, id }), keptOf);
}

export async function findKeptPerson({ db }: Asking, person: string): Promise<KeptPerson | null> {
  const [row] = await db
    .select(keptColumns)
    .from(people)
    .where(and(eq(people.id, person), isNull(people.deletedAt)));
  return row === undefined ? null : keptOf(row);
}

export async function updateKeptPerson(
  { db }: Asking,
  person: string,
  { steward, suspended }: { readonly steward?: boolean | undefined; readonly suspended?: boolean | undefined },
): Promise<void> {
  const set = {
    ...(steward === undefined ? {} : { steward }),
    ...(suspended === undefined ? {} : { suspendedAt: suspended ? sql`coalesce(suspended_at, now())` : null }),
  };
  if (Object.keys(set).length > 0) await db.update(people).set(set).where(eq(people.id, person));
}

/** Computations of claims, the one asked for last first. */
export async function listKeptJobs(
  { db }: Asking,
  { after, limit, status }: PageAsked & { readonly status?: KeptJob['status'] | undefined },
): Promise<Page<KeptJob>> {
  const from = readCursor(after);
  const older =
    from === null
      ? undefined
      : sql`(${editions.publishedAt}, ${editions.id}) < (${from.at.toISOString()}::timestamptz, ${from.id}::uuid)`;
  const rows = await db
    .select({
      id: editions.id,
      notebook: editions.notebook,
      edition: editions.number,
      by: personColumns,
      status: editions.status,
      reason: editions.reason,
      attempts: editions.attempts,
      askedAt: editions.publishedAt,
      endedAt: editions.sealedAt,
    })
    .from(editions)
    .leftJoin(people, eq(people.id, editions.publishedBy))
    .where(and(older, status === undefined ? undefined : eq(editions.status, status)))
    .orderBy(desc(editions.publishedAt), desc(editions.id))
    .limit(limit + 1);
  return pageFrom(
    rows,
    limit,
    ({ askedAt, id }) => ({ at: askedAt, id }),
    ({ askedAt, endedAt, ...row }) => ({
      ...row,
      askedAt: askedAt.toISOString(),
      endedAt: endedAt?.toISOString() ?? null,
    }),
  );
}

export interface Counts extends Pick<Health, 'database' | 'people' | 'notebooks' | 'editions'> {
  readonly mail: Pick<Health['mail'], 'waiting' | 'failed'>;
}

/** What the database knows of how the installation is; one round trip. */
export async function countAll({ db }: Asking): Promise<Counts> {
  const { rows } = await db.execute<Record<string, number | string | null>>(sql`select
    current_setting('server_version') as version,
    (pg_database_size(current_database()) / 1048576.0)::float8 as megabytes,
    (select count(*)::int from pg_stat_activity where datname = current_database()) as connections,
    (select count(*)::int from ${people} where ${people.deletedAt} is null) as people,
    (select count(*)::int from ${notebooks}) as notebooks,
    (select count(*)::int from ${editions} where ${editions.status} = 'computing') as computing,
    (select count(*)::int from ${editions} where ${editions.status} = 'failed') as failed,
    (select extract(epoch from now() - min(${editions.publishedAt}))::float8 from ${editions}
      where ${editions.status} = 'computing') as oldest,
    (select count(*)::int from ${mails} where ${mails.state} = 'waiting') as mail_waiting,
    (select count(*)::int from ${mails} where ${mails.state} = 'failed') as mail_failed`);
  const row = rows[0] ?? {};
  const number = (name: string): number => Number(row[name] ?? 0);
  return {
    database: {
      version: String(row.version),
      megabytes: Math.round(10 * number('megabytes')) / 10,
      connections: number('connections'),
    },
    people: number('people'),
    notebooks: number('notebooks'),
    editions: {
      computing: number('computing'),
      failed: number('failed'),
      oldestWaitSeconds: row.oldest == null ? null : Math.round(Number(row.oldest)),
    },
    mail: { waiting: number('mail_waiting'), failed: number('mail_failed') },
  };
}
