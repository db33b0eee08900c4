import { z } from 'zod';
import { idSchema, oneLine, plainText, timeSchema } from './common.ts';
import { actionSchema, grantedRoleSchema, roleSchema, scopeSchema } from './rights.ts';

/** A person as others see them; addresses are never shown to others. */
export const personSchema = z.object({ id: idSchema, handle: z.string(), name: z.string() });
export type Person = z.infer<typeof personSchema>;

export const meSchema = z.object({
  /** Null for a visitor. `unread`: how many notices wait. */
  person: personSchema
    .extend({ email: z.string().nullable(), steward: z.boolean(), unread: z.number().int() })
    .nullable(),
  /** What this person may do on the installation. */
  may: z.array(actionSchema),
});
export type Me = z.infer<typeof meSchema>;

/** An e-mail address, in lower case: what stands before the @ has no case in practice. */
export const emailSchema = plainText(254)
  .transform((text) => text.trim().toLowerCase())
  .pipe(z.email('This is no e-mail address.'));

/** Check character of the first fifteen digits of an ORCID iD (ISO 7064, MOD 11-2). */
function orcidCheck(digits: string): string {
  let total = 0;
  for (const digit of digits) total = ((total + Number(digit)) * 2) % 11;
  const check = (12 - total) % 11;
  return check === 10 ? 'X' : String(check);
}

/**
 * An ORCID iD as 0000-0000-0000-000X, its check character checked; also read from its address or without hyphens
 * (ORCID, "Structure of the ORCID Identifier").
 */
export const orcidSchema = plainText(60)
  .transform((text) => {
    const bare = text
      .trim()
      .replace(/^https?:\/\/orcid\.org\//i, '')
      .replace(/[-\s]/g, '')
      .toUpperCase();
    return bare.replace(/^(.{4})(.{4})(.{4})(.{4})$/, '$1-$2-$3-$4');
  })
  .refine((text) => /^\d{4}-\d{4}-\d{4}-\d{3}[\dX]$/.test(text), {
    message: 'An ORCID iD has sixteen digits, like 0000-0002-1825-0097.',
    abort: true,
  })
  .refine((text) => orcidCheck(text.replace(/-/g, '').slice(0, 15)) === text.at(-1), {
    message: 'The last character of this ORCID iD does not fit the others: one of them is mistyped.',
  });

/** How others name a person: @ and this. */
export const handleSchema = z
  .string()
  .trim()
  .regex(
    /^[a-z0-9](?:[a-z0-9-]{0,37}[a-z0-9])?$/i,
    'A handle has up to 39 letters, digits and hyphens, and no hyphen at its ends.',
  );

/** Ways to sign in that this installation offers; `href` is a page to go to, not to fetch. */
export const signInSchema = z.object({
  ways: z.array(z.object({ way: z.enum(['github', 'email']), href: z.string(), standIn: z.boolean() })),
});

/** When the mail that was asked for ends to be good, in minutes from now. Says nothing about whether the address is known. */
export const sentSchema = z.object({ minutes: z.number().int() });
/** What a link in a mail carries behind the # of its address. */
export const mailTokenSchema = z.string().min(20).max(100);

/** A way in: an account elsewhere, or an address that the person has shown to be theirs. */
export const identitySchema = z.object({
  id: idSchema,
  way: z.enum(['github', 'email']),
  /** The account's name there, or the address. */
  label: z.string(),
  since: timeSchema,
});
export type WayIn = z.infer<typeof identitySchema>;

export const mailModes = ['immediate', 'daily', 'off'] as const;
export const mailModeSchema = z.enum(mailModes);
export type MailMode = z.infer<typeof mailModeSchema>;

export const accountSchema = personSchema.extend({
  affiliation: z.string().nullable(),
  orcid: z.string().nullable(),
  /** Where mail goes; one of `addresses`. */
  email: z.string().nullable(),
  addresses: z.array(z.string()),
  steward: z.boolean(),
  since: timeSchema,
  ways: z.array(identitySchema),
});
export type AccountPage = z.infer<typeof accountSchema>;

export const changeAccountSchema = z.object({
  name: oneLine(120).optional(),
  handle: handleSchema.optional(),
  affiliation: oneLine(200).nullable().optional(),
  orcid: orcidSchema.nullable().optional(),
  email: emailSchema.optional(),
});

/** What deleting the account would do: these notebooks go with it; those have other people and are to be handed on first. */
export const deletionSchema = z.object({
  goes: z.array(z.object({ id: idSchema, title: z.string(), editions: z.number().int() })),
  handOn: z.array(z.object({ id: idSchema, title: z.string(), people: z.number().int() })),
});
export type Deletion = z.infer<typeof deletionSchema>;

export const sessionSchema = z.object({
  id: z.string(),
  current: z.boolean(),
  /** The browser as it named itself; empty when it did not. */
  browser: z.string(),
  since: timeSchema,
  until: timeSchema,
});
export type Session = z.infer<typeof sessionSchema>;

/** A personal access token as it is listed: never its secret. */
export const accessTokenSchema = z.object({
  id: idSchema,
  name: z.string(),
  scopes: z.array(scopeSchema),
  /** Its first characters, to know it by. */
  begins: z.string(),
  createdAt: timeSchema,
  expiresAt: timeSchema.nullable(),
  usedAt: timeSchema.nullable(),
});
export type AccessToken = z.infer<typeof accessTokenSchema>;

export const newAccessTokenSchema = z.object({
  name: oneLine(80),
  scopes: z.array(scopeSchema).min(1, 'Choose what the token may do.').max(10),
  /** Days that it is good for; null: until it is revoked. */
  days: z.number().int().min(1).max(3650).nullable().default(90),
});

export const memberSchema = z.object({ person: personSchema, role: roleSchema, since: timeSchema });
export type Member = z.infer<typeof memberSchema>;

/** Someone to add to a notebook, by handle (with or without @). */
export const addMemberSchema = z.object({
  handle: oneLine(100).transform((handle) => handle.replace(/^@/, '')),
  role: grantedRoleSchema,
});

export const inviteSchema = z.object({ email: emailSchema, role: grantedRoleSchema });

/** An invitation as those see it who may withdraw it. */
export const invitationSchema = z.object({
  id: idSchema,
  email: z.string(),
  role: grantedRoleSchema,
  by: personSchema.nullable(),
  sentAt: timeSchema,
  until: timeSchema,
});
export type Invitation = z.infer<typeof invitationSchema>;

/** An invitation as the invited sees it. */
export const invitedSchema = z.object({
  id: idSchema,
  notebook: z.object({ id: idSchema, title: z.string() }),
  role: grantedRoleSchema,
  by: personSchema.nullable(),
  /** The address that it was sent to. */
  email: z.string(),
  until: timeSchema,
});
export type Invited = z.infer<typeof invitedSchema>;

/** Names an invitation: by what its mail carries, or, among those to one's own addresses, by its id. */
export const whichInvitationSchema = z.union([
  z.strictObject({ token: mailTokenSchema }),
  z.strictObject({ invitation: idSchema }),
]);
