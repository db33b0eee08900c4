import { index, integer, json, pgEnum, pgTable, text, timestamp, unique, uuid } from 'drizzle-orm/pg-core';
import { type EditionContent, editionStatuses } from '../../../shared/contracts/editions.ts';
import { type Report, grades } from '../../../shared/contracts/report.ts';
import { notebooks } from './notebooks.ts';
import { people } from './people.ts';

export const editionStatus = pgEnum('edition_status', editionStatuses);
export const grade = pgEnum('grade', grades);

/** A trigger (drizzle/) refuses every change of what was published, and of the claims once they are sealed. */
export const editions = pgTable(
  'editions',
  {
    id: uuid().primaryKey().defaultRandom(),
    notebook: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
    number: integer().notNull(),
    summary: text().notNull(),
    /** `json`, not `jsonb`: kept to the letter. */
    content: json().$type<EditionContent>().notNull(),
    entryIds: uuid().array().notNull(),
    /** SHA-256 of the canonical content, 64 hex digits. */
    hash: text().notNull(),
    publishedBy: uuid().references(() => people.id, { onDelete: 'set null' }),
    publishedAt: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
    status: editionStatus().notNull().default('computing'),
    reason: text(),
    /** How often the computation of the claims was begun; an engine that ends its process is not asked for ever. */
    attempts: integer().notNull().default(0),
    engine: text(),
    sealedAt: timestamp({ withTimezone: true, precision: 3 }),
    report: json().$type<Report>(),
  },
  (table) => [unique('editions_number').on(table.notebook, table.number), index('editions_status').on(table.status)],
);

export const claims = pgTable(
  'claims',
  {
    id: uuid().primaryKey().defaultRandom(),
    edition: uuid()
      .notNull()
      .references(() => editions.id, { onDelete: 'cascade' }),
    /** Place in the report's list of claims, from 0. */
    ordinal: integer().notNull(),
    line: integer().notNull(),
    audit: text().notNull(),
    subject: text().notNull(),
    statement: text().notNull(),
    tex: text().notNull(),
    grade: grade().notNull(),
    figures: json().$type<Record<string, unknown>>().notNull(),
    witness: json().$type<Record<string, unknown>>().notNull(),
    cautions: text().array().notNull(),
    sources: text().array().notNull(),
    /** The entry that asks for the claim (an id of the edition), and the line within it, from 1. */
    entry: uuid(),
    entryLine: integer(),
  },
  (table) => [unique('claims_ordinal').on(table.edition, table.ordinal)],
);

/** Share links. A revoked one keeps its row, so that its token is never given out again. */
export const links = pgTable(
  'links',
  {
    id: uuid().primaryKey().defaultRandom(),
    edition: uuid()
      .notNull()
      .references(() => editions.id, { onDelete: 'cascade' }),
    token: text().notNull().unique(),
    createdBy: uuid().references(() => people.id, { onDelete: 'set null' }),
    createdAt: timestamp({ withTimezone: true, precision: 3 }).notNull().defaultNow(),
    revokedAt: timestamp({ withTimezone: true, precision: 3 }),
  },
  (table) => [index('links_edition').on(table.edition)],
);
