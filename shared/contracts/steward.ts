import { z } from 'zod';
import { idSchema, timeSchema } from './common.ts';
import { personSchema } from './people.ts';

/** A person as a steward sees them. */
export const keptPersonSchema = personSchema.extend({
  email: z.string().nullable(),
  affiliation: z.string().nullable(),
  steward: z.boolean(),
  /** Since when the account is closed to its person; null: it is open. */
  suspendedAt: timeSchema.nullable(),
  since: timeSchema,
  notebooks: z.number().int(),
  sessions: z.number().int(),
});
export type KeptPerson = z.infer<typeof keptPersonSchema>;

export const mailStates = ['waiting', 'sent', 'failed'] as const;
/** A mail of the queue. What it says is not shown, and is forgotten once it is sent. */
export const queuedMailSchema = z.object({
  id: idSchema,
  to: z.string(),
  subject: z.string(),
  state: z.enum(mailStates),
  attempts: z.number().int(),
  /** Why the last attempt failed. */
  error: z.string().nullable(),
  createdAt: timeSchema,
  /** When it is tried next; null once it is sent or given up. */
  dueAt: timeSchema.nullable(),
  sentAt: timeSchema.nullable(),
});
export type QueuedMail = z.infer<typeof queuedMailSchema>;

/** A computation of an edition's claims, as a steward sees it: which, not what. */
export const keptJobSchema = z.object({
  id: idSchema,
  notebook: idSchema,
  edition: z.number().int(),
  by: personSchema.nullable(),
  status: z.enum(['computing', 'sealed', 'failed']),
  reason: z.string().nullable(),
  attempts: z.number().int(),
  askedAt: timeSchema,
  endedAt: timeSchema.nullable(),
});
export type KeptJob = z.infer<typeof keptJobSchema>;

/** Bounds that a steward sets. They take effect with the next request. */
export const limitsSchema = z.object({
  /** Editions of one person whose claims are computed or wait at the same time. */
  jobsPerPerson: z.number().int().min(1).max(1000),
  notebooksPerPerson: z.number().int().min(1).max(1_000_000),
  invitationsPerDay: z.number().int().min(0).max(10_000),
  accessTokensPerPerson: z.number().int().min(0).max(1000),
  /** Whether someone who was not invited can make an account. */
  openSignUp: z.boolean(),
});
export type Limits = z.infer<typeof limitsSchema>;

/** How the installation is; nothing of it is secret, but it is nobody else's business. */
export const healthSchema = z.object({
  engine: z.string(),
  node: z.string(),
  upSeconds: z.number(),
  memoryMb: z.number(),
  database: z.object({ version: z.string(), megabytes: z.number(), connections: z.number().int() }),
  people: z.number().int(),
  notebooks: z.number().int(),
  editions: z.object({
    computing: z.number().int(),
    failed: z.number().int(),
    oldestWaitSeconds: z.number().nullable(),
  }),
  mail: z.object({
    /** Whether mail leaves the house, stays with the stand-in, or goes nowhere. */
    road: z.enum(['smtp', 'stand-in', 'none']),
    waiting: z.number().int(),
    failed: z.number().int(),
  }),
  /** What ought to be looked at, each a sentence. */
  worries: z.array(z.string()),
});
export type Health = z.infer<typeof healthSchema>;
