import { sql } from 'drizzle-orm';
import {
  boolean,
  index,
  integer,
  json,
  pgEnum,
  pgTable,
  primaryKey,
  text,
  timestamp,
  uniqueIndex,
  uuid,
} from 'drizzle-orm/pg-core';
import { noticeKinds } from '../../../shared/contracts/notices.ts';
import { grantedRoles } from '../../../shared/contracts/rights.ts';
import { mailStates } from '../../../shared/contracts/steward.ts';
import { notebooks } from './notebooks.ts';
import { mailMode, people } from './people.ts';

const time = () => timestamp({ withTimezone: true, precision: 3 });

export const noticeKind = pgEnum('notice_kind', noticeKinds);
export const mailState = pgEnum('mail_state', mailStates);
export const grantedRole = pgEnum('granted_role', grantedRoles);

/** Invitations by mail. Accepting, declining, withdrawing and inviting anew end them; they are kept to count them. */
export const invitations = pgTable(
  'invitations',
  {
    id: uuid().primaryKey().defaultRandom(),
    notebook: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
    email: text().notNull(),
    role: grantedRole().notNull(),
    /** Hash of what the mail carries. */
    hash: text().notNull().unique(),
    invitedBy: uuid().references(() => people.id, { onDelete: 'set null' }),
    createdAt: time().notNull().defaultNow(),
    expiresAt: time().notNull(),
    endedAt: time(),
  },
  (table) => [
    uniqueIndex('invitations_address')
      .on(table.notebook, table.email)
      .where(sql`${table.endedAt} is null`),
    index('invitations_email').on(table.email),
    index('invitations_by').on(table.invitedBy, table.createdAt),
  ],
);

export const notices = pgTable(
  'notices',
  {
    id: uuid().primaryKey().defaultRandom(),
    person: uuid()
      .notNull()
      .references(() => people.id, { onDelete: 'cascade' }),
    kind: noticeKind().notNull(),
    text: text().notNull(),
    actor: uuid().references(() => people.id, { onDelete: 'set null' }),
    notebook: uuid().references(() => notebooks.id, { onDelete: 'cascade' }),
    to: text().notNull(),
    createdAt: time().notNull().defaultNow(),
    readAt: time(),
    /** Waits for the next daily mail. */
    digest: boolean().notNull().default(false),
  },
  (table) => [
    index('notices_person').on(table.person, table.createdAt, table.id),
    index('notices_unread')
      .on(table.person)
      .where(sql`${table.readAt} is null`),
    index('notices_digest')
      .on(table.person)
      .where(sql`${table.digest}`),
  ],
);

/** How notices about one notebook come by mail, where it is not as for all others. */
export const noticeSettings = pgTable(
  'notice_settings',
  {
    person: uuid()
      .notNull()
      .references(() => people.id, { onDelete: 'cascade' }),
    notebook: uuid()
      .notNull()
      .references(() => notebooks.id, { onDelete: 'cascade' }),
    mail: mailMode().notNull(),
  },
  (table) => [primaryKey({ columns: [table.person, table.notebook] })],
);

export interface Stops {
  readonly person: string;
  readonly notebook: string | null;
}

/** Mail on its way out. What it says goes once it is sent, since it may carry a link that opens something. */
export const mails = pgTable(
  'mails',
  {
    id: uuid().primaryKey().defaultRandom(),
    to: text().notNull(),
    subject: text().notNull(),
    text: text(),
    /** Whose notices, about which notebook or (null) about all, its recipient can stop by one click; none for mail that was asked for. */
    stops: json().$type<Stops>(),
    state: mailState().notNull().default('waiting'),
    attempts: integer().notNull().default(0),
    error: text(),
    createdAt: time().notNull().defaultNow(),
    dueAt: time().notNull().defaultNow(),
    /** After this time it is given up: a link in it would be too old. */
    uselessAt: time(),
    sentAt: time(),
  },
  (table) => [
    index('mails_due')
      .on(table.dueAt)
      .where(sql`${table.state} = 'waiting'`),
    index('mails_created').on(table.createdAt, table.id),
  ],
);

/** Bounds that a steward set; what has no row has its standard. */
export const limits = pgTable('limits', { name: text().primaryKey(), value: integer().notNull() });
