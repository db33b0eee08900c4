import { sql, type SQL } from 'drizzle-orm';
import {
  type AnyPgColumn,
  customType,
  index,
  integer,
  pgEnum,
  pgTable,
  primaryKey,
  text,
  timestamp,
  uniqueIndex,
  uuid,
} from 'drizzle-orm/pg-core';
import { entryKinds } from '../../../shared/contracts/notebooks.ts';
import { roles, visibilities } from '../../../shared/contracts/rights.ts';
import { people } from './people.ts';

export const role = pgEnum('role', roles);
export const visibility = pgEnum('visibility', visibilities);
export const entryKind = pgEnum('entry_kind', entryKinds);

const tsvector = customType<{ data: string }>({ dataType: () => 'tsvector' });
const marks = '^[](){}<>|.,:;/\\+-*=&!?@#$%~"`_';
/** The last two arguments of translate(): marks to spaces, so that words are the same on both sides of a search. */
export const parting = `'${marks}', '${' '.repeat(marks.length)}'`;

export const notebooks = pgTable(
  'notebooks',
  {
    id: uuid().primaryKey().defaultRandom(),
    title: text().notNull(),
    authors: text().array().notNull().default([]),
    visibility: visibility().notNull().default('private'),
    createdAt: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
    changedAt: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
    originNotebook: uuid().references((): AnyPgColumn => notebooks.id, { onDelete: 'set null' }),
    originEdition: integer(),
    /** In the bin since; nobody finds it then but its owner, there. */
    deletedAt: timestamp({ withTimezone: true, precision: 3 }),
  },
  (table) => [
    index('notebooks_public')
      .on(table.changedAt, table.id)
      .where(sql`${table.visibility} = 'public'`),
    index('notebooks_origin').on(table.originNotebook),
    index('notebooks_bin')
      .on(table.deletedAt)
      .where(sql`${table.deletedAt} is not null`),
  ],
);

export const memberships = pgTable(
  'memberships',
  {
    notebook: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
    person: uuid()
      .notNull()
      .references(() => people.id, { onDelete: 'cascade' }),
    role: role().notNull(),
    since: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
    /** Put off this person's shelf. */
    archivedAt: timestamp({ withTimezone: true, precision: 3 }),
  },
  (table) => [
    primaryKey({ columns: [table.notebook, table.person] }),
    uniqueIndex('memberships_one_owner')
      .on(table.notebook)
      .where(sql`${table.role} = 'owner'`),
    index('memberships_person').on(table.person),
  ],
);

export const entries = pgTable(
  'entries',
  {
    id: uuid().primaryKey().defaultRandom(),
    notebook: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
    /** Ascending in the notebook, with gaps; deleted entries keep theirs, so that undoing puts them back. */
    position: integer().notNull(),
    kind: entryKind().notNull(),
    text: text().notNull(),
    version: integer().notNull().default(1),
    changedBy: uuid().references(() => people.id, { onDelete: 'set null' }),
    changedAt: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
    deletedAt: timestamp({ withTimezone: true, precision: 3 }),
    /**
     * What is found by words. Punctuation of the operator language parts words ("s^z[l.a]" is s, z, l, a); the cut keeps a text
     * of many rare words below the bound of a tsvector.
     */
    words: tsvector().generatedAlwaysAs(
      (): SQL => sql`to_tsvector('simple', translate(left(${entries.text}, 100000), ${sql.raw(parting)}))`,
    ),
  },
  (table) => [
    index('entries_notebook').on(table.notebook, table.position),
    index('entries_words').using('gin', table.words),
  ],
);

/** Who writes in an entry now. Past its time a hold counts for nothing. */
export const holds = pgTable('holds', {
  entry: uuid()
    .primaryKey()
    .references(() => entries.id, { onDelete: 'cascade' }),
  person: uuid()
    .notNull()
    .references(() => people.id, { onDelete: 'cascade' }),
  until: timestamp({ withTimezone: true, precision: 3 }).notNull(),
});

/** One row for each open live connection of a member; rows that were not renewed lately count for nothing. */
export const presences = pgTable(
  'presences',
  {
    connection: uuid().primaryKey(),
    notebook: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
    person: uuid()
      .notNull()
      .references(() => people.id, { onDelete: 'cascade' }),
    seenAt: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
  },
  (table) => [index('presences_notebook').on(table.notebook)],
);
