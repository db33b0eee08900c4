import { z } from 'zod';
import { idSchema, pageOf, pageQuery } from './common.ts';
import { notebookSchema } from './notebooks.ts';
import {
  binnedSchema,
  collationSchema,
  comparisonSchema,
  decideSchema,
  editionFormats,
  exportQuery,
  giveVerdictSchema,
  newRemarkSchema,
  newRerunSchema,
  previewSchema,
  readingNameSchema,
  remarkSchema,
  remarkText,
  replySchema,
  rerunSchema,
  sendingSchema,
  sendingSummarySchema,
  sendVariantsSchema,
  uploadSchema,
  verdictSchema,
} from './reviews.ts';
import { editionNumber, ofEdition, ofLink, ofNotebook, row, silence } from './row.ts';

const done = { answer: silence, status: 204 } as const;
const itemsOf = <Item extends z.ZodType>(item: Item) => z.object({ items: z.array(item) });
const ofSending = { of: 'notebook', params: z.object({ notebook: idSchema, sending: idSchema }) } as const;
const ofVariant = {
  of: 'notebook',
  params: z.object({ notebook: idSchema, sending: idSchema, variant: idSchema }),
} as const;
const ofRemark = { of: 'notebook', params: z.object({ notebook: idSchema, remark: idSchema }) } as const;
const ofClaim = {
  of: 'notebook',
  params: z.object({ notebook: idSchema, edition: editionNumber, claim: idSchema }),
} as const;
const format = z.enum(editionFormats);

/** The rows about reviews: comparing, variants, remarks, verdicts, computing again, the bin, in and out. A part of `endpoints`. */
export const reviewRows = {
  // comparing
  /** Two readings side by side: `left` and `right` are an edition's number, `draft`, or `origin` (where a fork came from). */
  compare: row('GET /api/notebooks/:notebook/comparison', {
    ...ofNotebook,
    action: 'read',
    query: z.object({ left: readingNameSchema, right: readingNameSchema }),
    answer: comparisonSchema,
  }),

  // variants
  /** A fork beside its origin now. 409 for a notebook that is no fork, or whose origin is gone or may not be read. */
  getCollation: row('GET /api/notebooks/:notebook/collation', {
    ...ofNotebook,
    action: 'edit',
    answer: collationSchema,
  }),
  /** Sends a fork's variants to the writers of its origin. */
  sendVariants: row('POST /api/notebooks/:notebook/variants', {
    ...ofNotebook,
    action: 'edit',
    body: sendVariantsSchema,
    answer: sendingSchema,
    status: 201,
  }),
  /** Variants that came (`received`) or that were sent from here (`sent`), newest first. */
  listVariants: row('GET /api/notebooks/:notebook/variants', {
    ...ofNotebook,
    action: 'adopt',
    query: z.object({ ...pageQuery, which: z.enum(['received', 'sent']).default('received') }),
    answer: pageOf(sendingSummarySchema),
  }),
  getVariants: row('GET /api/notebooks/:notebook/variants/:sending', {
    ...ofSending,
    action: 'adopt',
    answer: sendingSchema,
  }),
  /** By the senders, from the fork. What was decided stays. */
  withdrawVariants: row('DELETE /api/notebooks/:notebook/variants/:sending', { ...ofSending, action: 'edit', ...done }),
  /** Adopts or leaves one, in the origin; 409 if it was decided, 423 while someone writes in the entry. */
  decideVariant: row('PUT /api/notebooks/:notebook/variants/:sending/decisions/:variant', {
    ...ofVariant,
    action: 'adopt',
    body: decideSchema,
    answer: sendingSchema,
  }),

  // remarks
  /** In the order in which their entries stand; those whose entry is gone come last. `edition`: those that stand in it. */
  listRemarks: row('GET /api/notebooks/:notebook/remarks', {
    ...ofNotebook,
    action: 'read',
    query: z.object({ state: z.enum(['all', 'open', 'settled']).default('all'), edition: editionNumber.optional() }),
    answer: itemsOf(remarkSchema),
  }),
  makeRemark: row('POST /api/notebooks/:notebook/remarks', {
    ...ofNotebook,
    action: 'remark',
    body: newRemarkSchema,
    answer: remarkSchema,
    status: 201,
  }),
  replyToRemark: row('POST /api/notebooks/:notebook/remarks/:remark/replies', {
    ...ofRemark,
    action: 'remark',
    body: z.object({ text: remarkText }),
    answer: replySchema,
    status: 201,
  }),
  /** Another text, by its author, for a remark or a reply. */
  rewordRemark: row('PUT /api/notebooks/:notebook/remarks/:remark/text', {
    ...ofRemark,
    action: 'remark',
    body: z.object({ text: remarkText }),
    answer: replySchema,
  }),
  settleRemark: row('PUT /api/notebooks/:notebook/remarks/:remark/state', {
    ...ofRemark,
    action: 'remark',
    body: z.object({ state: z.enum(['open', 'settled']) }),
    answer: remarkSchema,
  }),
  /** By its author. A remark that was answered keeps its place without its text. */
  takeRemarkBack: row('DELETE /api/notebooks/:notebook/remarks/:remark', { ...ofRemark, action: 'remark', ...done }),
  /** All remarks as a W3C annotation collection (Web Annotation Data Model, 2017). */
  exportRemarks: row('GET /api/notebooks/:notebook/annotations', {
    ...ofNotebook,
    action: 'export',
    answer: z.looseObject({ '@context': z.unknown() }),
  }),

  // verdicts
  /** Of one edition. Verdicts on earlier ones are under their own number. */
  listVerdicts: row('GET /api/notebooks/:notebook/editions/:edition/verdicts', {
    ...ofEdition,
    action: 'read',
    answer: itemsOf(verdictSchema),
  }),
  /** On all editions, newest edition first; each says to which it belongs. */
  listAllVerdicts: row('GET /api/notebooks/:notebook/verdicts', {
    ...ofNotebook,
    action: 'read',
    answer: itemsOf(verdictSchema),
  }),
  /** On the edition as a whole; given again, it replaces one's own. 409 until its claims are sealed. */
  judgeEdition: row('PUT /api/notebooks/:notebook/editions/:edition/verdict', {
    ...ofEdition,
    action: 'judge',
    body: giveVerdictSchema,
    answer: verdictSchema,
  }),
  judgeClaim: row('PUT /api/notebooks/:notebook/editions/:edition/claims/:claim/verdict', {
    ...ofClaim,
    action: 'judge',
    body: giveVerdictSchema,
    answer: verdictSchema,
  }),
  takeVerdictBack: row('DELETE /api/notebooks/:notebook/editions/:edition/verdicts/:verdict', {
    of: 'notebook',
    params: z.object({ notebook: idSchema, edition: editionNumber, verdict: idSchema }),
    action: 'judge',
    ...done,
  }),

  // computing again
  /** A claim with other sizes or couplings, or the whole edition by the engine of today; the edition itself stays as it is. */
  rerunClaims: row('POST /api/notebooks/:notebook/editions/:edition/reruns', {
    ...ofEdition,
    action: 'rerun',
    body: newRerunSchema,
    answer: rerunSchema,
    status: 202,
  }),
  listReruns: row('GET /api/notebooks/:notebook/editions/:edition/reruns', {
    ...ofEdition,
    action: 'read',
    answer: itemsOf(rerunSchema),
  }),

  // shelf
  /** Puts a notebook off one's own shelf, or back. */
  archiveNotebook: row('PUT /api/notebooks/:notebook/archive', {
    ...ofNotebook,
    action: 'follow',
    body: z.object({ archived: z.boolean() }),
    ...done,
  }),
  /** One's own notebooks that were deleted less than 30 days ago. */
  listBin: row('GET /api/bin', { action: 'keep', of: 'installation', answer: itemsOf(binnedSchema) }),
  restoreNotebook: row('POST /api/bin/:binned/restore', {
    action: 'make',
    of: 'installation',
    params: z.object({ binned: idSchema }),
    answer: notebookSchema,
  }),
  /** For good. */
  emptyBin: row('DELETE /api/bin/:binned', {
    action: 'account',
    of: 'installation',
    params: z.object({ binned: idSchema }),
    ...done,
  }),

  // in and out
  /** What a file would become, and what is wrong with it by line. Stores nothing; `importNotebook` takes the same body. */
  previewImport: row('POST /api/imports/preview', {
    action: 'make',
    of: 'installation',
    body: uploadSchema,
    answer: previewSchema,
  }),
  /** An edition in a format; 409 until its claims are sealed, where the format holds claims. */
  exportEditionAs: row('GET /api/notebooks/:notebook/editions/:edition/exports/:format', {
    of: 'notebook',
    params: z.object({ notebook: idSchema, edition: editionNumber, format }),
    action: 'export',
    query: z.object(exportQuery),
    answer: z.string(),
    form: 'text',
  }),
  /** The working text in a format; 409 `conflict` while the server evaluates it for one that holds claims. No citation. */
  exportNotebookAs: row('GET /api/notebooks/:notebook/exports/:format', {
    of: 'notebook',
    params: z.object({ notebook: idSchema, format }),
    action: 'export',
    query: z.object(exportQuery),
    answer: z.string(),
    form: 'text',
  }),
  exportLinkedAs: row('GET /api/linked/:token/exports/:format', {
    ...ofLink,
    params: z.object({ token: z.string().max(100), format }),
    action: 'export',
    query: z.object(exportQuery),
    answer: z.string(),
    form: 'text',
  }),
  /** JSON Schema (draft 2020-12) of the format `json`. */
  getNotebookSchema: row('GET /api/schemas/notebook.json', {
    action: 'visit',
    of: 'installation',
    answer: z.looseObject({ $schema: z.string() }),
  }),
} as const;
