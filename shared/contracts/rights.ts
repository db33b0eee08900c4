import { z } from 'zod';

/**
 * Names of roles and of actions (DESIGN.md section 8), and no rules: who may do what is decided in one place, on the server.
 * The client shows what an answer's `may` lists and holds no table of its own.
 */

/** What a person can be on a notebook; there is exactly one owner. */
export const roles = ['owner', 'coauthor', 'referee', 'reader'] as const;
export type Role = (typeof roles)[number];
export const roleSchema = z.enum(roles);

/** Roles that an owner can hand out. */
export const grantedRoles = ['coauthor', 'referee', 'reader'] as const;
export const grantedRoleSchema = z.enum(grantedRoles);
export type GrantedRole = z.infer<typeof grantedRoleSchema>;

export const visibilities = ['private', 'public'] as const;
export type Visibility = (typeof visibilities)[number];
/** Sharing one edition by link is no visibility: a private notebook can have links. */
export const visibilitySchema = z.enum(visibilities);

export const actions = [
  // of the installation
  'visit', // look around without an account: sign-in, public notebooks
  'keep', // have a shelf, and notices
  'make', // make and import notebooks of one's own
  'account', // one's own account: profile, ways in, sessions, tokens, invitations
  'steward', // accounts, job limits, health
  // of a notebook
  'read',
  'export',
  'fork',
  'leave', // give up one's own role
  'follow', // choose how notices about it come, and put it off one's shelf
  'remark',
  'judge', // give a verdict
  'rerun', // have the server compute claims of an edition again
  'edit', // write entries, title, authors
  'publish', // seal an edition
  'adopt', // take variants of a fork over
  'invite', // people and their roles
  'transfer', // make someone else the owner
  'show', // visibility
  'link', // share one edition by link
  'delete',
] as const;
export type Action = (typeof actions)[number];
export const actionSchema = z.enum(actions);

/** What a personal access token can be good for; never one's account, other people's rights or the installation. */
export const scopes = ['read', 'write', 'publish'] as const;
export type Scope = (typeof scopes)[number];
export const scopeSchema = z.enum(scopes);
