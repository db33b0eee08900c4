import { z } from 'zod';
import { accountRows } from './account-rows.ts';
import { catalogueRows } from './catalogue.ts';
import { idSchema, pageOf, pageQuery } from './common.ts';
import { editionSchema, editionSummarySchema, linkSchema, publishSchema } from './editions.ts';
import {
  authorsSchema,
  entryKindSchema,
  entrySchema,
  entryText,
  holdSchema,
  newEntrySchema,
  newNotebookSchema,
  notebookSchema,
  notebookSummarySchema,
  titleSchema,
} from './notebooks.ts';
import { jobRows } from './job-rows.ts';
import { addMemberSchema, memberSchema } from './people.ts';
import { reviewRows } from './review-rows.ts';
import { filters, uploadSchema } from './reviews.ts';
import { grantedRoleSchema, visibilitySchema } from './rights.ts';
import { editionNumber, ofEdition, ofEntry, ofLink, ofNotebook, row, search, silence } from './row.ts';

export { writeHeader } from './row.ts';

/** The table. Client calls, server routes and the matrix test of rights all walk it. */
export const endpoints = {
  ...accountRows,
  ...reviewRows,
  ...jobRows,
  ...catalogueRows,

  // shelf and public notebooks, newest change first
  listShelf: row('GET /api/shelf', {
    action: 'keep',
    of: 'installation',
    query: z.object({
      ...search,
      ...filters,
      whose: z.enum(['all', 'own', 'shared']).default('all'),
      /** Notebooks that one put off the shelf are listed apart. */
      state: z.enum(['kept', 'archived']).default('kept'),
    }),
    answer: pageOf(notebookSummarySchema),
  }),
  listPublic: row('GET /api/public', {
    action: 'visit',
    of: 'installation',
    query: z.object({ ...search, ...filters }),
    answer: pageOf(notebookSummarySchema),
  }),

  // notebooks
  createNotebook: row('POST /api/notebooks', {
    action: 'make',
    of: 'installation',
    body: newNotebookSchema,
    answer: notebookSchema,
    status: 201,
  }),
  /**
   * Makes a notebook of a file (`.gw`, JSON, Pauli strings as CSV); its title is the file's own, else the one given, else the first
   * line of prose. 400 with `places` by line where the file cannot be read: `previewImport` says so beforehand.
   */
  importNotebook: row('POST /api/imports', {
    action: 'make',
    of: 'installation',
    body: uploadSchema,
    answer: notebookSchema,
    status: 201,
  }),
  getNotebook: row('GET /api/notebooks/:notebook', { ...ofNotebook, action: 'read', answer: notebookSchema }),
  /** Title and authors. */
  changeNotebook: row('PATCH /api/notebooks/:notebook', {
    ...ofNotebook,
    action: 'edit',
    body: z.object({ title: titleSchema.optional(), authors: authorsSchema.optional() }),
    answer: notebookSchema,
  }),
  setVisibility: row('PUT /api/notebooks/:notebook/visibility', {
    ...ofNotebook,
    action: 'show',
    body: z.object({ visibility: visibilitySchema }),
    answer: notebookSchema,
  }),
  /** Into the bin of its owner, for 30 days. */
  deleteNotebook: row('DELETE /api/notebooks/:notebook', {
    ...ofNotebook,
    action: 'delete',
    answer: silence,
    status: 204,
  }),
  /** A copy of one's own, of the working text or of one edition. */
  forkNotebook: row('POST /api/notebooks/:notebook/forks', {
    ...ofNotebook,
    action: 'fork',
    body: z.object({ edition: editionNumber.optional(), title: titleSchema.optional() }),
    answer: notebookSchema,
    status: 201,
  }),
  /** The working text as `.gw`. */
  exportNotebook: row('GET /api/notebooks/:notebook/source', {
    ...ofNotebook,
    action: 'export',
    answer: z.string(),
    form: 'text',
  }),
  /** Server-sent events about this notebook; being connected is being present. */
  live: row('GET /api/notebooks/:notebook/live', { ...ofNotebook, action: 'read', answer: z.never(), form: 'events' }),

  // entries
  insertEntry: row('POST /api/notebooks/:notebook/entries', {
    ...ofNotebook,
    action: 'edit',
    body: newEntrySchema,
    answer: entrySchema,
    status: 201,
  }),
  /** 412 `changed-meanwhile` with both texts if the version is not the current one; 423 `held` while someone else writes. */
  saveEntry: row('PUT /api/notebooks/:notebook/entries/:entry', {
    ...ofEntry,
    action: 'edit',
    body: z.object({ text: entryText, kind: entryKindSchema.optional() }),
    answer: entrySchema,
    ifMatch: true,
  }),
  moveEntry: row('PUT /api/notebooks/:notebook/entries/:entry/place', {
    ...ofEntry,
    action: 'edit',
    body: z.object({ before: idSchema.nullable() }),
    answer: z.object({ order: z.array(idSchema) }),
  }),
  deleteEntry: row('DELETE /api/notebooks/:notebook/entries/:entry', {
    ...ofEntry,
    action: 'edit',
    answer: silence,
    status: 204,
  }),
  /** Undoes a deletion: the entry stands where it stood. */
  restoreEntry: row('POST /api/notebooks/:notebook/entries/:entry/restore', {
    ...ofEntry,
    action: 'edit',
    answer: z.object({ entry: entrySchema, order: z.array(idSchema) }),
  }),
  /** Takes or renews the hold (45 seconds); 423 `held` while someone else has it. */
  holdEntry: row('PUT /api/notebooks/:notebook/entries/:entry/hold', {
    ...ofEntry,
    action: 'edit',
    answer: holdSchema,
  }),
  releaseEntry: row('DELETE /api/notebooks/:notebook/entries/:entry/hold', {
    ...ofEntry,
    action: 'edit',
    answer: silence,
    status: 204,
  }),

  // editions
  /** Seals the working text; its claims follow (status `computing`). 409 if nothing changed since the last edition. */
  publishEdition: row('POST /api/notebooks/:notebook/editions', {
    ...ofNotebook,
    action: 'publish',
    body: publishSchema,
    answer: editionSummarySchema,
    status: 201,
  }),
  listEditions: row('GET /api/notebooks/:notebook/editions', {
    ...ofNotebook,
    action: 'read',
    query: z.object(pageQuery),
    answer: pageOf(editionSummarySchema),
  }),
  getEdition: row('GET /api/notebooks/:notebook/editions/:edition', {
    ...ofEdition,
    action: 'read',
    answer: editionSchema,
  }),
  exportEdition: row('GET /api/notebooks/:notebook/editions/:edition/source', {
    ...ofEdition,
    action: 'export',
    answer: z.string(),
    form: 'text',
  }),
  /** Asks again for the claims of an edition that failed. */
  evaluateEdition: row('POST /api/notebooks/:notebook/editions/:edition/evaluation', {
    ...ofEdition,
    action: 'publish',
    answer: editionSummarySchema,
    status: 202,
  }),

  // share links: one edition, revocable
  listLinks: row('GET /api/notebooks/:notebook/links', {
    ...ofNotebook,
    action: 'link',
    answer: z.object({ items: z.array(linkSchema) }),
  }),
  createLink: row('POST /api/notebooks/:notebook/links', {
    ...ofNotebook,
    action: 'link',
    body: z.object({ edition: editionNumber }),
    answer: linkSchema,
    status: 201,
  }),
  revokeLink: row('DELETE /api/notebooks/:notebook/links/:link', {
    of: 'notebook',
    params: z.object({ notebook: idSchema, link: idSchema }),
    action: 'link',
    answer: silence,
    status: 204,
  }),
  getLinked: row('GET /api/linked/:token', { ...ofLink, action: 'read', answer: editionSchema }),
  exportLinked: row('GET /api/linked/:token/source', { ...ofLink, action: 'export', answer: z.string(), form: 'text' }),

  // people of a notebook
  listMembers: row('GET /api/notebooks/:notebook/people', {
    ...ofNotebook,
    action: 'read',
    answer: z.object({ items: z.array(memberSchema) }),
  }),
  addMember: row('POST /api/notebooks/:notebook/people', {
    ...ofNotebook,
    action: 'invite',
    body: addMemberSchema,
    answer: memberSchema,
    status: 201,
  }),
  changeMember: row('PUT /api/notebooks/:notebook/people/:person', {
    of: 'notebook',
    params: z.object({ notebook: idSchema, person: idSchema }),
    action: 'invite',
    body: z.object({ role: grantedRoleSchema }),
    answer: memberSchema,
  }),
  removeMember: row('DELETE /api/notebooks/:notebook/people/:person', {
    of: 'notebook',
    params: z.object({ notebook: idSchema, person: idSchema }),
    action: 'invite',
    answer: silence,
    status: 204,
  }),
  /** Gives up one's own role; not for the owner. */
  leaveNotebook: row('POST /api/notebooks/:notebook/leave', {
    ...ofNotebook,
    action: 'leave',
    answer: silence,
    status: 204,
  }),
} as const;

export type EndpointName = keyof typeof endpoints;
export type Params<N extends EndpointName> = z.output<(typeof endpoints)[N]['params']>;
/** As the server gets it, defaults filled in. */
export type Query<N extends EndpointName> = z.output<(typeof endpoints)[N]['query']>;
export type Body<N extends EndpointName> = z.output<(typeof endpoints)[N]['body']>;
/** As the client gives it. */
export type ParamsGiven<N extends EndpointName> = z.input<(typeof endpoints)[N]['params']>;
export type QueryGiven<N extends EndpointName> = z.input<(typeof endpoints)[N]['query']>;
export type BodyGiven<N extends EndpointName> = z.input<(typeof endpoints)[N]['body']>;
export type Answer<N extends EndpointName> = z.output<(typeof endpoints)[N]['answer']>;

/** The address of a row with its parameters put in, each percent-encoded; query values that are undefined are left out. */
export function address(
  row: { readonly path: string },
  params: Readonly<Record<string, unknown>> = {},
  query: Readonly<Record<string, unknown>> = {},
): string {
  const path = row.path.replace(/:(\w+)/g, (_, name: string) => encodeURIComponent(String(params[name])));
  const asked = Object.entries(query).filter(([, value]) => value !== undefined && value !== null);
  if (asked.length === 0) return path;
  const words = asked.map(([name, value]) => `${name}=${encodeURIComponent(String(value))}`);
  return `${path}?${words.join('&')}`;
}
