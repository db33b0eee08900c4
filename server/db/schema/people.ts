import { boolean, index, json, pgTable, primaryKey, text, timestamp, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import { sql } from 'drizzle-orm';

export const people = pgTable(
  'people',
  {
    id: uuid().primaryKey().defaultRandom(),
    /** How others name this person: unique whatever its case. */
    handle: text().notNull(),
    name: text().notNull(),
    email: text(),
    steward: boolean().notNull().default(false),
    createdAt: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
  },
  (table) => [uniqueIndex('people_handle').on(sql`lower(${table.handle})`)],
);

/** Ways in: one row for each account elsewhere that a person signs in with. */
export const identities = pgTable(
  'identities',
  {
    provider: text().notNull(),
    /** The account's permanent id there; names change. */
    subject: text().notNull(),
    person: uuid()
      .notNull()
      .references(() => people.id, { onDelete: 'cascade' }),
    createdAt: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
  },
  (table) => [primaryKey({ columns: [table.provider, table.subject] }), index('identities_person').on(table.person)],
);

/** The table of connect-pg-simple, with its own names and types; `sess.passport.user` is the person. */
export const sessions = pgTable(
  'sessions',
  {
    sid: text().primaryKey(),
    sess: json().$type<StoredSession>().notNull(),
    expire: timestamp({ precision: 6 }).notNull(),
  },
  (table) => [
    index('sessions_expire').on(table.expire),
    index('sessions_person').on(sql`((${table.sess} -> 'passport' ->> 'user'))`),
  ],
);

export interface StoredSession {
  readonly passport?: { readonly user?: string };
  readonly since?: string;
  readonly browser?: string;
}
