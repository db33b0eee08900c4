import { z } from 'zod';
import { bounds, idSchema, oneLine, plainText, timeSchema } from './common.ts';
import { entryKindSchema } from './notebooks.ts';
import { personSchema } from './people.ts';
import { claimSchema, grades, orbitSchema, problemSchema } from './report.ts';

/** What coauthors, referees and reading groups do with editions: compare, collate, remark, judge, compute again. */

// comparing

/** One of the two states that are compared: an edition by its number, the working text, or where a fork came from. */
export const readingNameSchema = z
  .string()
  .regex(/^(?:draft|origin|[1-9]\d{0,8})$/, 'Name an edition by its number, or "draft", or "origin".');

/** A piece of a text beside another: `same` stands in both, `left` and `right` in one. */
export const pieceSchema = z.object({ in: z.enum(['same', 'left', 'right']), text: z.string() });
export type TextPiece = z.infer<typeof pieceSchema>;

export const entryDifferenceSchema = z.object({
  what: z.enum(['added', 'removed', 'changed']),
  kind: entryKindSchema,
  /** Number of the entry on each side, from 1; null where it does not stand. */
  left: z.number().int().nullable(),
  right: z.number().int().nullable(),
  pieces: z.array(pieceSchema),
});
export type EntryDifference = z.infer<typeof entryDifferenceSchema>;

const sideTerm = z.object({
  coefficient: z.string(),
  tex: z.string(),
  spoken: z.string(),
  orbit: z.array(orbitSchema),
});
/**
 * A term of a model that is not the same on both sides. sign: the coefficient is the negative; coefficient: another one; support:
 * the same coefficient, up to its sign, on other spins or with other Pauli letters.
 */
export const termDifferenceSchema = z.object({
  what: z.enum(['added', 'removed', 'sign', 'coefficient', 'support']),
  left: sideTerm.nullable(),
  right: sideTerm.nullable(),
});
export type TermDifference = z.infer<typeof termDifferenceSchema>;

export const modelDifferenceSchema = z.object({
  /** Its name on each side; null where there is no such model. Both given and different: it was renamed. */
  left: z.string().nullable(),
  right: z.string().nullable(),
  terms: z.array(termDifferenceSchema),
  /** The constant on each side, where it differs. */
  constant: z.object({ left: z.string(), right: z.string() }).nullable(),
});
export type ModelDifference = z.infer<typeof modelDifferenceSchema>;

export const declarationDifferenceSchema = z.object({
  what: z.enum(['added', 'removed', 'changed']),
  kind: z.string(),
  name: z.string(),
  left: z.string().nullable(),
  right: z.string().nullable(),
});
export type DeclarationDifference = z.infer<typeof declarationDifferenceSchema>;

/** A claim on each side: `tex` and grade. grade: the grade changed; figures: the same grade with other figures or cautions. */
const sideClaim = claimSchema.pick({
  line: true,
  statement: true,
  tex: true,
  grade: true,
  figures: true,
  cautions: true,
});
export const claimDifferenceSchema = z.object({
  what: z.enum(['added', 'removed', 'grade', 'figures']),
  audit: z.string(),
  subject: z.string(),
  left: sideClaim.nullable(),
  right: sideClaim.nullable(),
});
export type ClaimDifference = z.infer<typeof claimDifferenceSchema>;

/** What differs as physics. Order, spelling and names of bound variables are no difference. */
export const physicsDifferenceSchema = z.object({
  models: z.array(modelDifferenceSchema),
  declarations: z.array(declarationDifferenceSchema),
  claims: z.array(claimDifferenceSchema),
});
export type PhysicsDifference = z.infer<typeof physicsDifferenceSchema>;

const comparedSideSchema = z.object({
  name: readingNameSchema,
  notebook: z.object({ id: idSchema, title: z.string() }),
  /** Number of the edition; null for a working text. */
  edition: z.number().int().nullable(),
  title: z.string(),
  authors: z.array(z.string()),
  /** Problems in its source; null until it is evaluated. */
  problems: z.number().int().nullable(),
});

export const comparisonSchema = z.object({
  left: comparedSideSchema,
  right: comparedSideSchema,
  /** Prose, as text. */
  entries: z.array(entryDifferenceSchema),
  /** Statements that are spelled differently, as text: to be read beside `physics`, and no difference by itself. */
  source: z.array(entryDifferenceSchema),
  /** Null while the server evaluates a side (the event `evaluation` tells when it is done), or where it could not: see `reason`. */
  physics: physicsDifferenceSchema.nullable(),
  reason: z.string().nullable(),
});
export type Comparison = z.infer<typeof comparisonSchema>;

// variants

export const variantKinds = ['changed', 'added', 'removed', 'title'] as const;
export const decisions = ['adopted', 'left'] as const;

export const variantSchema = z.object({
  id: idSchema,
  kind: z.enum(variantKinds),
  entryKind: entryKindSchema,
  /** The origin's entry that it is about; null for what was added, and for the title. */
  entry: idSchema.nullable(),
  /** For what was added: the origin's entry that it follows; null: it stands first. */
  after: idSchema.nullable(),
  /** What both began with; null for what was added. */
  base: z.string().nullable(),
  /** What the origin reads now (or read when it was decided); null where its entry is gone. */
  origin: z.string().nullable(),
  /** What the fork reads; null where it removed the entry. */
  fork: z.string().nullable(),
  /** The origin's reading beside the fork's. */
  pieces: z.array(pieceSchema),
  /** Both sides changed it: adopting takes a text to stand for both, or the fork's reading; the origin's stays on record here. */
  bothChanged: z.boolean(),
  /** What adopting it alone would do to the claims; null while that is computed, or where it could not be: see `reason`. */
  claims: z.array(claimDifferenceSchema).nullable(),
  reason: z.string().nullable(),
  decision: z
    .object({
      what: z.enum(decisions),
      reason: z.string(),
      by: personSchema.nullable(),
      at: timeSchema,
      /** The text that was adopted. */
      text: z.string().nullable(),
    })
    .nullable(),
});
export type Variant = z.infer<typeof variantSchema>;

/** Variants that were sent together, with their letter. */
export const sendingSummarySchema = z.object({
  id: idSchema,
  letter: z.string(),
  by: personSchema.nullable(),
  at: timeSchema,
  /** `withdrawn` by its senders; `closed` once each variant is decided. */
  status: z.enum(['waiting', 'closed', 'withdrawn']),
  origin: z.object({ id: idSchema, title: z.string() }).nullable(),
  fork: z.object({ id: idSchema, title: z.string() }).nullable(),
  /** Edition of the origin that the fork began with; null: the working text. */
  edition: z.number().int().nullable(),
  variants: z.number().int(),
  adopted: z.number().int(),
  left: z.number().int(),
});
export type SendingSummary = z.infer<typeof sendingSummarySchema>;

export const sendingSchema = sendingSummarySchema.omit({ variants: true }).extend({ variants: z.array(variantSchema) });
export type Sending = z.infer<typeof sendingSchema>;

/** A fork beside its origin, before anything is sent. */
export const collationSchema = z.object({
  origin: z.object({ id: idSchema, title: z.string(), edition: z.number().int().nullable() }),
  variants: z.array(variantSchema.omit({ id: true, decision: true }).extend({ key: z.string() })),
});
export type Collation = z.infer<typeof collationSchema>;

export const sendVariantsSchema = z.object({
  letter: plainText(20_000).refine((text) => text.trim() !== '', {
    message: 'Say in a few words what the variants are for.',
  }),
  /** Keys of the collation's variants to send; left out: all. */
  keys: z.array(z.string().max(100)).max(bounds.entries).optional(),
});

export const decideSchema = z.object({
  what: z.enum(decisions),
  reason: plainText(5_000).default(''),
  /** Adopted with this text instead of the fork's reading, for example one that joins both. */
  text: plainText(bounds.entryCharacters).optional(),
});

// remarks

const quoteSchema = z.object({
  exact: plainText(2_000),
  prefix: plainText(200).default(''),
  suffix: plainText(200).default(''),
});
const entrySubject = z.object({
  what: z.literal('entry'),
  entry: idSchema,
  quote: quoteSchema.nullable().default(null),
});
const termSubject = z.object({
  what: z.literal('term'),
  entry: idSchema,
  model: plainText(200),
  orbit: z.array(orbitSchema).min(1).max(500),
  steps: z.array(z.number().int()).max(3),
  tex: plainText(5_000),
});
const claimSubject = z.object({
  what: z.literal('claim'),
  entry: idSchema,
  audit: plainText(100),
  subject: plainText(500),
  statement: plainText(5_000),
  tex: plainText(10_000).default(''),
});
/** What a remark speaks of. A term is known by its operators, a claim by its audit, subject and statement. */
export const remarkSubjectSchema = z.discriminatedUnion('what', [entrySubject, termSubject, claimSubject]);
export type RemarkSubject = z.infer<typeof remarkSubjectSchema>;

export const remarkText = plainText(20_000).refine((text) => text.trim() !== '', {
  message: 'A remark has to say something.',
});
export const newRemarkSchema = z.object({
  subject: remarkSubjectSchema,
  /** Markdown with $…$ mathematics; @handle mentions a person of the notebook. */
  text: remarkText,
  /** The edition that it was read in; left out: the working text. */
  edition: z.number().int().min(1).optional(),
});

export const replySchema = z.object({
  id: idSchema,
  by: personSchema.nullable(),
  /** Null where it was taken back and others answered it. */
  text: z.string().nullable(),
  mentions: z.array(personSchema),
  at: timeSchema,
  editedAt: timeSchema.nullable(),
});
export type Reply = z.infer<typeof replySchema>;

export const remarkSchema = replySchema.extend({
  subject: remarkSubjectSchema,
  state: z.enum(['open', 'settled']),
  settledBy: personSchema.nullable(),
  settledAt: timeSchema.nullable(),
  /** The edition that it was made on; null: on the working text. */
  madeOn: z.number().int().nullable(),
  /** here: its entry stands in the working text (with the quoted words, if it quotes some); changed: the words are gone; gone: the entry is. */
  stands: z.enum(['here', 'changed', 'gone']),
  /** Last edition in which its entry stands; null if it never was in one. */
  edition: z.number().int().nullable(),
  replies: z.array(replySchema),
});
export type Remark = z.infer<typeof remarkSchema>;

// verdicts

export const verdictWords = ['stands', 'fails', 'unsure'] as const;
export const verdictWordSchema = z.enum(verdictWords);
export const giveVerdictSchema = z.object({
  word: verdictWordSchema,
  reason: plainText(20_000).refine((text) => text.trim() !== '', { message: 'A verdict needs its reason.' }),
});
export const verdictSchema = z.object({
  id: idSchema,
  by: personSchema.nullable(),
  /** The edition that it was given on; it speaks of no other. */
  edition: z.number().int(),
  /** Null: on the edition as a whole. */
  claim: idSchema.nullable(),
  word: verdictWordSchema,
  reason: z.string(),
  at: timeSchema,
  changedAt: timeSchema.nullable(),
});
export type Verdict = z.infer<typeof verdictSchema>;

// computing again

export const evaluationStatuses = ['computing', 'done', 'failed'] as const;

/** Other sizes or couplings for one claim. */
export const variationSchema = z.object({
  /** Sizes as the language writes them: "3 x 3". Left out: as in the edition. */
  sizes: z
    .array(
      z
        .string()
        .trim()
        .max(60)
        .regex(/^[\d\s,x×()-]+$/, 'A size reads like "3 x 3".'),
    )
    .min(1)
    .max(8)
    .optional(),
  /** Values of couplings by name, as the language writes them: "1/2", "0.6", "sqrt(2)". */
  couplings: z
    .record(
      z.string().max(60),
      z
        .string()
        .trim()
        .min(1)
        .max(60)
        .regex(/^[\w\s.+\-*/^()]+$/, 'A value reads like "1/2".'),
    )
    .optional(),
});
export type Variation = z.infer<typeof variationSchema>;

export const rerunSchema = z.object({
  id: idSchema,
  edition: z.number().int(),
  /** The sealed claim that was computed again; null: the whole edition. */
  claim: idSchema.nullable(),
  variation: variationSchema,
  by: personSchema.nullable(),
  at: timeSchema,
  status: z.enum(evaluationStatuses),
  reason: z.string().nullable(),
  /** Version of the engine that computes it. */
  engine: z.string(),
  /** What it came to; empty until it is done. Not sealed: the edition keeps its own. */
  claims: z.array(claimSchema),
  problems: z.array(problemSchema),
  /** For the whole edition: what differs from the sealed claims. */
  differences: z.array(claimDifferenceSchema),
});
export type Rerun = z.infer<typeof rerunSchema>;

export const newRerunSchema = variationSchema.extend({
  /** Left out: all claims of the edition as they stand, by the engine of today. */
  claim: idSchema.optional(),
});

// finding

export const mapKinds = ['dictionary', 'gauging', 'circuit', 'solving', 'states', 'composition'] as const;
/** What lists of notebooks are narrowed by, besides words. */
export const filters = {
  /** A lattice of the language: chain, square, …, custom. */
  lattice: oneLine(40).optional(),
  map: z.enum(mapKinds).optional(),
  /** Notebooks whose newest sealed edition has a claim of this grade. */
  grade: z.enum(grades).optional(),
} as const;

export const binnedSchema = z.object({
  id: idSchema,
  title: z.string(),
  editions: z.number().int(),
  deletedAt: timeSchema,
  /** When it goes for good. */
  until: timeSchema,
});
export type Binned = z.infer<typeof binnedSchema>;

// in and out

export const editionFormats = [
  'gw',
  'json',
  'article',
  'annotations',
  'bibtex',
  'cff',
  'pauli-csv',
  'matrix-market',
  'openqasm',
] as const;
export const exportQuery = {
  /** For pauli-csv and matrix-market: the model; left out: the first. For openqasm: the map. */
  of: oneLine(200).optional(),
  /** For those three: size of the cluster, "3 x 3"; left out: as declared. */
  size: z.string().trim().max(60).optional(),
} as const;

export const uploadForms = ['gw', 'json', 'pauli-csv'] as const;
export const uploadSchema = z.object({
  /** Left out: told by how the text begins. */
  form: z.enum(uploadForms).optional(),
  title: oneLine(200).optional(),
  source: plainText(bounds.sourceCharacters),
});

/** What an upload would become; nothing is stored. */
export const previewSchema = z.object({
  form: z.enum(uploadForms),
  title: z.string(),
  authors: z.array(z.string()),
  entries: z.array(z.object({ kind: entryKindSchema, text: z.string() })),
  /** What is wrong with the file, by its lines; with any of severity `error` it cannot be taken in. */
  faults: z.array(
    z.object({
      line: z.number().int(),
      column: z.number().int(),
      message: z.string(),
      severity: z.enum(['error', 'caution']),
    }),
  ),
  /** Problems of the operator language in what it would become, by entry (from 0) and line within it; these do not keep it out. */
  problems: z.array(problemSchema.extend({ entry: z.number().int().nullable() })),
});
export type Preview = z.infer<typeof previewSchema>;
