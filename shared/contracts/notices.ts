import { z } from 'zod';
import { idSchema, timeSchema } from './common.ts';
import { mailModeSchema, personSchema } from './people.ts';

/** What people are told about. */
export const noticeKinds = ['invitation', 'variants', 'remark', 'mention', 'verdict', 'job'] as const;
export const noticeKindSchema = z.enum(noticeKinds);
export type NoticeKind = z.infer<typeof noticeKindSchema>;

export const noticeSchema = z.object({
  id: idSchema,
  kind: noticeKindSchema,
  /** One sentence, whole in itself. */
  text: z.string(),
  /** Who did it; null for what the installation did by itself. */
  by: personSchema.nullable(),
  notebook: z.object({ id: idSchema, title: z.string() }).nullable(),
  /** A page of ours to read on. */
  to: z.string(),
  at: timeSchema,
  read: z.boolean(),
});
export type Notice = z.infer<typeof noticeSchema>;

/** How notices come by mail: for everything, and for notebooks that are set apart. */
export const noticeSettingsSchema = z.object({
  mail: mailModeSchema,
  notebooks: z.array(z.object({ notebook: idSchema, title: z.string(), mail: mailModeSchema })),
});
export type NoticeSettings = z.infer<typeof noticeSettingsSchema>;

/** What `liveMine` sends: the event's name, and its data as JSON. */
export const personEvents = {
  /** A notice came or was read elsewhere. */
  notices: z.object({ unread: z.number().int() }),
  /** A job of one's own went on: read it, or all of them for null. */
  job: z.object({ job: idSchema.nullable() }),
  /** A notebook on one's shelf changed: read the shelf again. */
  shelf: z.object({ notebook: idSchema }),
  /** Rights or account changed: read `getMe` and the shelf again. */
  account: z.object({}),
} as const;
export type PersonEvent = keyof typeof personEvents;
