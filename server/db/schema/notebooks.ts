import { sql } from 'drizzle-orm';
import {
  type AnyPgColumn,
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
  },
  (table) => [
    index('notebooks_public')
      .on(table.changedAt, table.id)
      .where(sql`${table.visibility} = 'public'`),
    index('notebooks_origin').on(table.originNotebook),
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
  },
  (table) => [index('entries_notebook').on(table.notebook, table.position)],
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
