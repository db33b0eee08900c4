import {
  doublePrecision,
  index,
  integer,
  json,
  pgEnum,
  pgTable,
  text,
  timestamp,
  unique,
  uuid,
} from 'drizzle-orm/pg-core';
import { questionStates } from '../../../shared/contracts/jobs.ts';
import { notebooks } from './notebooks.ts';
import { people } from './people.ts';

export const questionState = pgEnum('question_state', questionStates);

const time = () => timestamp({ withTimezone: true, precision: 3 });

/**
 * Numerical questions, each once, whoever asked: with their answer once it is found, and until then with how far it is. A question is
 * whole in itself: a source, and the name (by content and version of the engine) of what is asked in it.
 */
export const questions = pgTable(
  'questions',
  {
    /** SHA-256 as 64 hex digits. */
    name: text().primaryKey(),
    engine: text().notNull(),
    /** A source that asks it; any other that does asks the same. Null for answers that came with an edition. */
    source: text(),
    audit: text().notNull(),
    text: text().notNull(),
    size: text().notNull(),
    operations: doublePrecision().notNull(),
    bytes: doublePrecision().notNull(),
    cost: text().notNull(),
    state: questionState().notNull().default('waiting'),
    /** 0 … 1, and what is being done. */
    done: doublePrecision().notNull().default(0),
    doing: text().notNull().default(''),
    /** When the present attempt began, and how far the question was then. */
    begunAt: time(),
    begunDone: doublePrecision().notNull().default(0),
    /** Attempts since there was progress: what ends its process each time is not tried for ever. */
    attempts: integer().notNull().default(0),
    /** What a later attempt goes on from. */
    checkpoint: json(),
    /** The engine's findings, as plain data. */
    findings: json().$type<readonly unknown[]>(),
    reason: text(),
    createdAt: time().notNull().defaultNow(),
    endedAt: time(),
  },
  (table) => [index('questions_state').on(table.state)],
);

/** Who wants an answer. When nobody does any more, the question is dropped. */
export const jobs = pgTable(
  'jobs',
  {
    id: uuid().primaryKey().defaultRandom(),
    person: uuid()
      .notNull()
      .references(() => people.id, { onDelete: 'cascade' }),
    /** Where the answer is waited for; null: nowhere in particular. */
    notebook: uuid().references(() => notebooks.id, { onDelete: 'set null' }),
    question: text()
      .notNull()
      .references(() => questions.name, { onDelete: 'cascade' }),
    askedAt: time().notNull().defaultNow(),
    cancelledAt: time(),
  },
  (table) => [
    index('jobs_person').on(table.person, table.askedAt, table.id),
    index('jobs_notebook').on(table.notebook),
    unique('jobs_question').on(table.question, table.person),
  ],
);
