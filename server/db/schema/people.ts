import { sql } from 'drizzle-orm';
import {
  boolean,
  index,
  json,
  pgEnum,
  pgTable,
  primaryKey,
  text,
  timestamp,
  uniqueIndex,
  uuid,
} from 'drizzle-orm/pg-core';
import { mailModes } from '../../../shared/contracts/people.ts';
import { scopes } from '../../../shared/contracts/rights.ts';

export const mailMode = pgEnum('mail_mode', mailModes);
export const scope = pgEnum('scope', scopes);

const time = () => timestamp({ withTimezone: true, precision: 3 });

export const people = pgTable(
  'people',
  {
    id: uuid().primaryKey().defaultRandom(),
    /** How others name this person: unique whatever its case. */
    handle: text().notNull(),
    name: text().notNull(),
    affiliation: text(),
    orcid: text(),
    /** Where mail goes. */
    email: text(),
    noticeMail: mailMode().notNull().default('immediate'),
    steward: boolean().notNull().default(false),
    suspendedAt: time(),
    /** A deleted account keeps the name, for what it wrote, and a handle that nobody types. */
    deletedAt: time(),
    createdAt: time().notNull().defaultNow(),
  },
  (table) => [uniqueIndex('people_handle').on(sql`lower(${table.handle})`)],
);

/** Ways in: one row for each account elsewhere that a person signs in with. */
export const identities = pgTable(
  'identities',
  {
    id: uuid().notNull().defaultRandom().unique(),
    /** `github`, its stand-in, or `email`. */
    provider: text().notNull(),
    /** The account's permanent id there (names change), or the address. */
    subject: text().notNull(),
    /** What the person knows it by. */
    label: text().notNull().default(''),
    person: uuid()
      .notNull()
      .references(() => people.id, { onDelete: 'cascade' }),
    createdAt: time().notNull().defaultNow(),
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

/** What a mail's link opens, once, until its time. Only the hash of what the mail carries is kept. */
export const mailLinks = pgTable(
  'mail_links',
  {
    id: uuid().primaryKey().defaultRandom(),
    hash: text().notNull().unique(),
    email: text().notNull(),
    /** The person whose way in the address is to become; null for a link that signs in. */
    person: uuid().references(() => people.id, { onDelete: 'cascade' }),
    to: text().notNull().default('/'),
    createdAt: time().notNull().defaultNow(),
    expiresAt: time().notNull(),
    usedAt: time(),
  },
  (table) => [index('mail_links_email').on(table.email, table.createdAt)],
);

/** Personal access tokens; only their hash is kept. A revoked one keeps its row, so that its use can be told apart. */
export const accessTokens = pgTable(
  'access_tokens',
  {
    id: uuid().primaryKey().defaultRandom(),
    person: uuid()
      .notNull()
      .references(() => people.id, { onDelete: 'cascade' }),
    name: text().notNull(),
    scopes: scope().array().notNull(),
    hash: text().notNull().unique(),
    begins: text().notNull(),
    createdAt: time().notNull().defaultNow(),
    expiresAt: time(),
    usedAt: time(),
    revokedAt: time(),
  },
  (table) => [index('access_tokens_person').on(table.person)],
);
