import { z } from 'zod';
import { idSchema, oneLine, timeSchema } from './common.ts';
import { actionSchema, grantedRoleSchema, roleSchema } from './rights.ts';

/** A person as others see them; addresses are never shown to others. */
export const personSchema = z.object({ id: idSchema, handle: z.string(), name: z.string() });
export type Person = z.infer<typeof personSchema>;

export const meSchema = z.object({
  /** Null for a visitor. */
  person: personSchema.extend({ email: z.string().nullable(), steward: z.boolean() }).nullable(),
  /** What this person may do on the installation. */
  may: z.array(actionSchema),
});
export type Me = z.infer<typeof meSchema>;

/** Ways to sign in that this installation offers; `href` is a page to go to, not to fetch. */
export const signInSchema = z.object({
  ways: z.array(z.object({ way: z.enum(['github']), href: z.string(), standIn: z.boolean() })),
});

export const sessionSchema = z.object({
  id: z.string(),
  current: z.boolean(),
  /** The browser as it named itself; empty when it did not. */
  browser: z.string(),
  since: timeSchema,
  until: timeSchema,
});
export type Session = z.infer<typeof sessionSchema>;

export const memberSchema = z.object({ person: personSchema, role: roleSchema, since: timeSchema });
export type Member = z.infer<typeof memberSchema>;

/** Someone to add to a notebook, by handle (with or without @). */
export const addMemberSchema = z.object({
  handle: oneLine(100).transform((handle) => handle.replace(/^@/, '')),
  role: grantedRoleSchema,
});
