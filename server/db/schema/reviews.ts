import { sql } from 'drizzle-orm';
import {
  type AnyPgColumn,
  index,
  integer,
  json,
  pgEnum,
  pgTable,
  primaryKey,
  text,
  timestamp,
  unique,
  uniqueIndex,
  uuid,
} from 'drizzle-orm/pg-core';
import type { EntryKind } from '../../../shared/contracts/notebooks.ts';
import type { Report } from '../../../shared/contracts/report.ts';
import {
  decisions,
  evaluationStatuses,
  type RemarkSubject,
  variantKinds,
  type Variation,
  verdictWords,
} from '../../../shared/contracts/reviews.ts';
import { entryKind, notebooks } from './notebooks.ts';
import { people } from './people.ts';
import { claims, editions } from './work.ts';

const time = () => timestamp({ withTimezone: true, precision: 3 });

export const evaluationStatus = pgEnum('evaluation_status', evaluationStatuses);
export const variantKind = pgEnum('variant_kind', variantKinds);
export const decision = pgEnum('decision', decisions);
export const verdictWord = pgEnum('verdict_word', verdictWords);

/** What a fork began with: each entry as it was, with its id in the origin and in the fork. */
export interface ForkBase {
  /** The origin's title, and the one that the fork was made with. */
  readonly title: string;
  readonly ownTitle: string;
  readonly entries: readonly {
    /** Null where the edition that was copied is older than the ids of its entries. */
    readonly origin: string | null;
    readonly own: string;
    readonly kind: EntryKind;
    readonly text: string;
  }[];
}

export const forkBases = pgTable('fork_bases', {
  notebook: uuid()
    .primaryKey()
    .references(() => notebooks.id, { onDelete: 'cascade' }),
  base: json().$type<ForkBase>().notNull(),
});

/** Reports of texts that are no edition's, by what was asked: the same text and engine are computed once. */
export const evaluations = pgTable(
  'evaluations',
  {
    id: uuid().primaryKey().defaultRandom(),
    /** SHA-256 of the text. */
    key: text().notNull(),
    engine: text().notNull(),
    text: text().notNull(),
    status: evaluationStatus().notNull().default('computing'),
    reason: text(),
    attempts: integer().notNull().default(0),
    report: json().$type<Report>(),
    askedAt: time().notNull().defaultNow(),
    /** When someone last needed it: what nobody looks at is forgotten. */
    usedAt: time().notNull().defaultNow(),
  },
  (table) => [
    unique('evaluations_key').on(table.key, table.engine),
    index('evaluations_waiting')
      .on(table.askedAt)
      .where(sql`${table.status} = 'computing'`),
  ],
);

/** Notebooks whose readers wait for an evaluation. */
export const evaluationWaits = pgTable(
  'evaluation_waits',
  {
    evaluation: uuid()
      .notNull()
      .references(() => evaluations.id, { onDelete: 'cascade' }),
    notebook: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
  },
  (table) => [primaryKey({ columns: [table.evaluation, table.notebook] })],
);

/** Variants of a fork, sent to the origin's writers with a letter. */
export const sendings = pgTable(
  'sendings',
  {
    id: uuid().primaryKey().defaultRandom(),
    origin: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
    /** Its variants outlive the fork. */
    fork: uuid().references(() => notebooks.id, { onDelete: 'set null' }),
    edition: integer(),
    letter: text().notNull(),
    sentBy: uuid().references(() => people.id, { onDelete: 'set null' }),
    sentAt: time().notNull().defaultNow(),
    withdrawnAt: time(),
  },
  (table) => [
    index('sendings_origin').on(table.origin, table.sentAt, table.id),
    index('sendings_fork').on(table.fork, table.sentAt, table.id),
  ],
);

export const variants = pgTable(
  'variants',
  {
    id: uuid().primaryKey().defaultRandom(),
    sending: uuid()
      .notNull()
      .references(() => sendings.id, { onDelete: 'cascade' }),
    ordinal: integer().notNull(),
    kind: variantKind().notNull(),
    entryKind: entryKind().notNull(),
    /** Of the origin; no reference: what it speaks of may go. */
    entry: uuid(),
    after: uuid(),
    base: text(),
    fork: text(),
    decision: decision(),
    reason: text(),
    decidedBy: uuid().references(() => people.id, { onDelete: 'set null' }),
    decidedAt: time(),
    /** The origin's reading when it was decided: kept, whatever was adopted. */
    displaced: text(),
    adopted: text(),
  },
  (table) => [unique('variants_ordinal').on(table.sending, table.ordinal)],
);

/** Remarks, and replies to them (those with a parent). */
export const remarks = pgTable(
  'remarks',
  {
    id: uuid().primaryKey().defaultRandom(),
    notebook: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
    parent: uuid().references((): AnyPgColumn => remarks.id, { onDelete: 'cascade' }),
    by: uuid().references(() => people.id, { onDelete: 'set null' }),
    /** Null where it was taken back after others had answered. */
    text: text(),
    mentions: uuid().array().notNull().default([]),
    /** Null for replies. */
    subject: json().$type<RemarkSubject>(),
    entry: uuid(),
    madeOn: integer(),
    createdAt: time().notNull().defaultNow(),
    editedAt: time(),
    settledBy: uuid().references(() => people.id, { onDelete: 'set null' }),
    settledAt: time(),
  },
  (table) => [index('remarks_notebook').on(table.notebook, table.createdAt), index('remarks_parent').on(table.parent)],
);

export const verdicts = pgTable(
  'verdicts',
  {
    id: uuid().primaryKey().defaultRandom(),
    edition: uuid()
      .notNull()
      .references(() => editions.id, { onDelete: 'cascade' }),
    /** Null: on the edition as a whole. */
    claim: uuid().references(() => claims.id, { onDelete: 'cascade' }),
    by: uuid().references(() => people.id, { onDelete: 'set null' }),
    word: verdictWord().notNull(),
    reason: text().notNull(),
    createdAt: time().notNull().defaultNow(),
    changedAt: time(),
  },
  (table) => [
    uniqueIndex('verdicts_claim')
      .on(table.edition, table.claim, table.by)
      .where(sql`${table.claim} is not null`),
    uniqueIndex('verdicts_whole')
      .on(table.edition, table.by)
      .where(sql`${table.claim} is null`),
  ],
);

/** Claims of an edition that someone had computed again. */
export const reruns = pgTable(
  'reruns',
  {
    id: uuid().primaryKey().defaultRandom(),
    edition: uuid()
      .notNull()
      .references(() => editions.id, { onDelete: 'cascade' }),
    claim: uuid().references(() => claims.id, { onDelete: 'cascade' }),
    variation: json().$type<Variation>().notNull(),
    evaluation: uuid()
      .notNull()
      .references(() => evaluations.id),
    by: uuid().references(() => people.id, { onDelete: 'set null' }),
    askedAt: time().notNull().defaultNow(),
  },
  (table) => [
    index('reruns_edition').on(table.edition, table.askedAt),
    index('reruns_evaluation').on(table.evaluation),
  ],
);
