import { z } from 'zod';
import { idSchema, oneLine, timeSchema } from './common.ts';
import { entryKindSchema } from './notebooks.ts';
import { personSchema } from './people.ts';
import { claimSchema, reportSchema } from './report.ts';

/**
 * What an edition's hash covers, and nothing else: SHA-256 over the canonical JSON (RFC 8785) of this.
 * Neither ids nor dates are in it, so the same words have the same hash wherever they stand.
 */
export const editionContentSchema = z.object({
  format: z.literal('gaugewright-edition/1'),
  title: z.string(),
  authors: z.array(z.string()),
  entries: z.array(z.object({ kind: entryKindSchema, text: z.string() })),
});
export type EditionContent = z.infer<typeof editionContentSchema>;

/** computing: the server is at the claims; sealed: they stand for good; failed: `reason` says why, and it can be asked again. */
export const editionStatuses = ['computing', 'sealed', 'failed'] as const;

export const editionSummarySchema = z.object({
  /** From 1, without gaps, in order of publishing. */
  number: z.number().int(),
  summary: z.string(),
  /** SHA-256 as 64 hex digits. */
  hash: z.string(),
  publishedBy: personSchema.nullable(),
  publishedAt: timeSchema,
  status: z.enum(editionStatuses),
  reason: z.string().nullable(),
  /** Version of the engine that computed the claims; null until sealed. */
  engine: z.string().nullable(),
  sealedAt: timeSchema.nullable(),
  /** How many claims have which grade; empty until sealed. */
  grades: z.record(z.string(), z.number().int()),
});
export type EditionSummary = z.infer<typeof editionSummarySchema>;

export const sealedClaimSchema = claimSchema.extend({
  id: idSchema,
  /** The entry that asks for this claim, and the line within it, from 1. */
  entry: idSchema.nullable(),
  entryLine: z.number().int().nullable(),
});
export type SealedClaim = z.infer<typeof sealedClaimSchema>;

export const editionSchema = editionSummarySchema.extend({
  notebook: z.object({ id: idSchema, title: z.string() }),
  content: editionContentSchema,
  /** Ids of the content's entries, in their order; for remarks, not part of the hash. */
  entryIds: z.array(idSchema),
  claims: z.array(sealedClaimSchema),
  /** The whole report that the server sealed; null until then. */
  report: reportSchema.nullable(),
});
export type Edition = z.infer<typeof editionSchema>;

export const publishSchema = z.object({
  /** One line that says what is new. */
  summary: oneLine(300),
});

export const linkSchema = z.object({
  id: idSchema,
  edition: z.number().int(),
  /** What the address of the shared page ends with: /shared/TOKEN. */
  token: z.string(),
  createdAt: timeSchema,
});
export type Link = z.infer<typeof linkSchema>;
