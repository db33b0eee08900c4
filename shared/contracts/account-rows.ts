import { z } from 'zod';
import { idSchema, oneLine, pageOf, pageQuery, plainText } from './common.ts';
import { noticeSchema, noticeSettingsSchema } from './notices.ts';
import {
  accessTokenSchema,
  accountSchema,
  changeAccountSchema,
  deletionSchema,
  emailSchema,
  invitationSchema,
  invitedSchema,
  inviteSchema,
  mailModeSchema,
  mailTokenSchema,
  memberSchema,
  meSchema,
  newAccessTokenSchema,
  sentSchema,
  sessionSchema,
  signInSchema,
  whichInvitationSchema,
} from './people.ts';
import { ofNotebook, row, search, silence } from './row.ts';
import {
  healthSchema,
  keptJobSchema,
  keptPersonSchema,
  limitsSchema,
  mailStates,
  queuedMailSchema,
} from './steward.ts';

const visit = { action: 'visit', of: 'installation' } as const;
const account = { action: 'account', of: 'installation' } as const;
const keep = { action: 'keep', of: 'installation' } as const;
const steward = { action: 'steward', of: 'installation' } as const;
const done = { answer: silence, status: 204 } as const;
const itemsOf = <Item extends z.ZodType>(item: Item) => z.object({ items: z.array(item) });
const path = plainText(500);

/** The rows about people: sign-in, account, tokens, invitations, notices, stewards. A part of `endpoints`. */
export const accountRows = {
  // sign-in
  getMe: row('GET /api/me', { ...visit, answer: meSchema }),
  getSignIn: row('GET /api/sign-in', { ...visit, answer: signInSchema }),
  signOut: row('POST /api/sign-out', { ...visit, ...done }),
  /** Sends a one-time link by mail; `to`: a page of ours to go to afterwards. The same answer for every address. */
  askForLink: row('POST /api/sign-in/mail', {
    ...visit,
    body: z.object({ email: emailSchema, to: path.optional() }),
    answer: sentSchema,
    status: 202,
  }),
  /**
   * Signs in with what a mail carries: a one-time link or an invitation (which is accepted with it). 409 with `nameNeeded` where
   * the address is new and no name was given; the link stays good. 404 for one that is unknown, used or too old.
   */
  useLink: row('POST /api/sign-in/link', {
    ...visit,
    body: z.object({ token: mailTokenSchema, name: oneLine(120).optional() }),
    answer: z.object({ to: z.string() }),
  }),
  /** Events about the asking person: see personEvents. */
  liveMine: row('GET /api/me/live', { ...keep, answer: z.never(), form: 'events' }),
  /** The rows of the HTTP interface as an OpenAPI 3.1 document. */
  getOpenApi: row('GET /api/openapi.json', { ...visit, answer: z.looseObject({ openapi: z.string() }) }),

  // one's own account
  getAccount: row('GET /api/account', { ...account, answer: accountSchema }),
  changeAccount: row('PATCH /api/account', { ...account, body: changeAccountSchema, answer: accountSchema }),
  /** Sends a mail to an address that is to become a way in; its link leads to `confirmAddress`. */
  addAddress: row('POST /api/account/addresses', {
    ...account,
    body: z.object({ email: emailSchema }),
    answer: sentSchema,
    status: 202,
  }),
  /** By the person who asked for it, signed in. 409 if the address is another person's way in. */
  confirmAddress: row('POST /api/account/addresses/confirm', {
    ...account,
    body: z.object({ token: mailTokenSchema }),
    answer: accountSchema,
  }),
  /** Takes a way in away; 409 for the last one. (One more way in with GitHub: go to `/auth/github?link=1`.) */
  removeWayIn: row('DELETE /api/account/ways/:way', {
    ...account,
    params: z.object({ way: idSchema }),
    answer: accountSchema,
  }),
  /** All that is kept about the person, as JSON. */
  exportAccount: row('GET /api/account/export', { ...account, answer: z.looseObject({ format: z.string() }) }),
  getDeletion: row('GET /api/account/deletion', { ...account, answer: deletionSchema }),
  /** Deletes the account; `handle` is typed as a confirmation. 409 while a notebook with other people has no other owner. */
  deleteAccount: row('POST /api/account/deletion', {
    ...account,
    body: z.object({ handle: z.string().max(100) }),
    ...done,
  }),
  listSessions: row('GET /api/sessions', { ...account, answer: itemsOf(sessionSchema) }),
  endSession: row('DELETE /api/sessions/:session', {
    ...account,
    params: z.object({ session: z.string().max(100) }),
    ...done,
  }),
  /** Ends all sessions but the asking one. */
  endOtherSessions: row('DELETE /api/sessions', { ...account, ...done }),

  // personal access tokens, sent as `Authorization: Bearer …`
  listTokens: row('GET /api/tokens', { ...account, answer: itemsOf(accessTokenSchema) }),
  /** The only answer that shows the secret. */
  createToken: row('POST /api/tokens', {
    ...account,
    body: newAccessTokenSchema,
    answer: accessTokenSchema.extend({ secret: z.string() }),
    status: 201,
  }),
  revokeToken: row('DELETE /api/tokens/:key', { ...account, params: z.object({ key: idSchema }), ...done }),

  // invitations
  listInvitations: row('GET /api/notebooks/:notebook/invitations', {
    ...ofNotebook,
    action: 'invite',
    answer: itemsOf(invitationSchema),
  }),
  /** Invites by mail; a pending invitation to the same address is replaced. The link is good for 14 days. */
  invite: row('POST /api/notebooks/:notebook/invitations', {
    ...ofNotebook,
    action: 'invite',
    body: inviteSchema,
    answer: invitationSchema,
    status: 201,
  }),
  withdrawInvitation: row('DELETE /api/notebooks/:notebook/invitations/:invitation', {
    of: 'notebook',
    params: z.object({ notebook: idSchema, invitation: idSchema }),
    action: 'invite',
    ...done,
  }),
  /** Pending ones to an address that one has shown to be one's own. */
  listInvited: row('GET /api/invitations', { ...account, answer: itemsOf(invitedSchema) }),
  /** What an invitation is to, for whoever has its mail, signed in or not. */
  lookAtInvitation: row('POST /api/invitations/look', {
    ...visit,
    body: z.object({ token: mailTokenSchema }),
    answer: invitedSchema,
  }),
  /** As the person signed in; whoever has the mail may accept under another address than it was sent to. */
  acceptInvitation: row('POST /api/invitations/accept', {
    ...account,
    body: whichInvitationSchema,
    answer: z.object({ notebook: idSchema }),
  }),
  declineInvitation: row('POST /api/invitations/decline', { ...account, body: whichInvitationSchema, ...done }),
  /** Makes a member the owner; who was it stays as coauthor. */
  transferNotebook: row('PUT /api/notebooks/:notebook/owner', {
    ...ofNotebook,
    action: 'transfer',
    body: z.object({ person: idSchema }),
    answer: itemsOf(memberSchema),
  }),

  // notices, newest first
  listNotices: row('GET /api/notices', {
    ...keep,
    query: z.object({ ...pageQuery, show: z.enum(['all', 'unread']).default('all') }),
    answer: pageOf(noticeSchema),
  }),
  /** Marks some as read, or all that there are. */
  readNotices: row('POST /api/notices/read', {
    ...account,
    body: z.object({ notices: z.union([z.literal('all'), z.array(idSchema).max(500)]) }),
    answer: z.object({ unread: z.number().int() }),
  }),
  getNoticeSettings: row('GET /api/notices/settings', { ...account, answer: noticeSettingsSchema }),
  setNoticeMail: row('PUT /api/notices/settings', {
    ...account,
    body: z.object({ mail: mailModeSchema }),
    answer: noticeSettingsSchema,
  }),
  /** How notices about one notebook come by mail; null: as all others. */
  followNotebook: row('PUT /api/notebooks/:notebook/notices', {
    ...ofNotebook,
    action: 'follow',
    body: z.object({ mail: mailModeSchema.nullable() }),
    answer: noticeSettingsSchema,
  }),

  // stewards
  listKeptPeople: row('GET /api/steward/people', {
    ...steward,
    query: z.object(search),
    answer: pageOf(keptPersonSchema),
  }),
  /** `suspended`: the account is closed to its person and all sessions end. 409 for taking one's own mark or account away. */
  changeKeptPerson: row('PATCH /api/steward/people/:person', {
    ...steward,
    params: z.object({ person: idSchema }),
    body: z.object({ steward: z.boolean().optional(), suspended: z.boolean().optional() }),
    answer: keptPersonSchema,
  }),
  listKeptJobs: row('GET /api/steward/jobs', {
    ...steward,
    query: z.object({ ...pageQuery, status: z.enum(['computing', 'sealed', 'failed']).optional() }),
    answer: pageOf(keptJobSchema),
  }),
  listMail: row('GET /api/steward/mail', {
    ...steward,
    query: z.object({ ...pageQuery, state: z.enum(mailStates).optional() }),
    answer: pageOf(queuedMailSchema),
  }),
  /** Tries a mail again that was given up. */
  retryMail: row('POST /api/steward/mail/:mail/retry', {
    ...steward,
    params: z.object({ mail: idSchema }),
    answer: queuedMailSchema,
  }),
  getLimits: row('GET /api/steward/limits', { ...steward, answer: limitsSchema }),
  setLimits: row('PUT /api/steward/limits', { ...steward, body: limitsSchema, answer: limitsSchema }),
  getHealth: row('GET /api/steward/health', { ...steward, answer: healthSchema }),
} as const;
