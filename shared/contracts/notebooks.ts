import { z } from 'zod';
import { bounds, idSchema, oneLine, plainText, timeSchema } from './common.ts';
import { personSchema } from './people.ts';
import { actionSchema, roleSchema, visibilitySchema } from './rights.ts';

export const entryKinds = ['prose', 'statements'] as const;
export type EntryKind = (typeof entryKinds)[number];
export const entryKindSchema = z.enum(entryKinds);

export const entryText = plainText(bounds.entryCharacters);
export const titleSchema = oneLine(200);
export const authorsSchema = z.array(oneLine(120)).max(50);

/** Who writes in an entry now, and until when unless they go on. */
export const holdSchema = z.object({ by: personSchema, until: timeSchema });
export type Hold = z.infer<typeof holdSchema>;

export const entrySchema = z.object({
  id: idSchema,
  kind: entryKindSchema,
  text: z.string(),
  /** Counts the saves of this entry from 1; a save names the version that it started from. */
  version: z.number().int(),
  hold: holdSchema.nullable(),
  changedBy: personSchema.nullable(),
  changedAt: timeSchema,
});
export type Entry = z.infer<typeof entrySchema>;

/** Members of the problem `changed-meanwhile`: both texts, nothing lost. `theirs` is null if the entry was deleted. */
export const changedSchema = z.object({
  yours: z.object({ text: z.string(), version: z.number().int() }),
  theirs: entrySchema.nullable(),
});
export type Changed = z.infer<typeof changedSchema>;

export const notebookSummarySchema = z.object({
  id: idSchema,
  title: z.string(),
  authors: z.array(z.string()),
  visibility: visibilitySchema,
  owner: personSchema,
  /** The reader's own role; null on a public notebook of others. */
  role: roleSchema.nullable(),
  changedAt: timeSchema,
  entries: z.number().int(),
  /** Number of the newest edition; null when nothing was published. */
  edition: z.number().int().nullable(),
});
export type NotebookSummary = z.infer<typeof notebookSummarySchema>;

/** Where a fork came from; null for those who may not read the origin. */
export const originSchema = z.object({ notebook: idSchema, title: z.string(), edition: z.number().int().nullable() });

export const notebookSchema = notebookSummarySchema.omit({ entries: true }).extend({
  createdAt: timeSchema,
  origin: originSchema.nullable(),
  entries: z.array(entrySchema),
  /** How many share links are in force; 0 for those who may not make them. */
  links: z.number().int(),
  may: z.array(actionSchema),
});
export type Notebook = z.infer<typeof notebookSchema>;

export const newNotebookSchema = z.object({
  title: titleSchema,
  authors: authorsSchema.optional(),
  entries: z
    .array(z.object({ kind: entryKindSchema, text: entryText }))
    .max(bounds.entries)
    .default([]),
});

export const newEntrySchema = z.object({
  /** Chosen by the client if it wants to ask again safely: the same id twice inserts once. */
  id: idSchema.optional(),
  kind: entryKindSchema,
  text: entryText,
  /** The entry to stand before; null or left out: at the end. */
  before: idSchema.nullable().default(null),
});

/** What `live` sends: the event's name, and its data as JSON. */
export const liveEvents = {
  /** Entries were inserted, saved, moved, deleted or restored. `entry` null: read the notebook again. */
  entries: z.object({ entry: idSchema.nullable(), version: z.number().int().nullable(), by: idSchema.nullable() }),
  hold: z.object({ entry: idSchema, hold: holdSchema.nullable() }),
  /** Title, authors, visibility, people or rights changed, or the notebook was deleted: read it again. */
  notebook: z.object({}),
  edition: z.object({ number: z.number().int(), status: z.enum(['computing', 'sealed', 'failed']) }),
  /** Remarks were made, answered, settled or taken back: read them again. */
  remarks: z.object({ remark: idSchema.nullable() }),
  /** Verdicts on an edition were given or taken back: read them again. */
  verdicts: z.object({ edition: z.number().int() }),
  /** Variants came, went or were decided: read them again. */
  variants: z.object({ sending: idSchema }),
  /** The server evaluated a text that someone waits for here: a comparison, a collation or a rerun. */
  evaluation: z.object({ status: z.enum(['done', 'failed']) }),
  /** A numerical question that someone handed to the server from here has its answer, or failed. */
  answer: z.object({ question: z.string() }),
  /** The people of the notebook who have it open now. */
  present: z.object({ people: z.array(personSchema) }),
} as const;
export type LiveEvent = keyof typeof liveEvents;
