import { actions, type Action, type Role, type Scope, scopes, type Visibility } from '../shared/contracts/rights.ts';

/** Where a person stands: on the installation, and on one notebook or one linked edition if the question is about one. */
export interface Standing {
  /** Null for a visitor. */
  readonly person: string | null;
  readonly steward: boolean;
  /** Of the access token that was shown; left out where a person asks from a page. */
  readonly scopes?: readonly Scope[];
  readonly on: StandingOn | null;
}

export interface StandingOn {
  readonly notebook: string;
  readonly visibility: Visibility;
  readonly role: Role | null;
  /** Id of the edition that a share link opens; then nothing else of the notebook is meant. */
  readonly linked: string | null;
}

/**
 * Who one can be in the table below. `guest` and `passer` are a visitor and a signed-in person without a role,
 * at a public notebook or with a share link in hand.
 */
type Hat = 'anyone' | 'person' | 'steward' | 'guest' | 'passer' | Role;

const readers: readonly Hat[] = ['passer', 'reader', 'referee', 'coauthor', 'owner'];
const writers: readonly Hat[] = ['coauthor', 'owner'];

/**
 * Who may what (DESIGN.md section 8). A steward runs the installation and has no right on the notebooks of others;
 * a referee has a single role on a notebook, so no verdict comes from one who writes in it.
 */
const table: Readonly<Record<Action, readonly Hat[]>> = {
  visit: ['anyone'],
  keep: ['person'],
  make: ['person'],
  account: ['person'],
  steward: ['steward'],
  read: ['guest', ...readers],
  export: ['guest', ...readers],
  fork: readers,
  leave: ['reader', 'referee', 'coauthor'],
  follow: ['reader', 'referee', ...writers],
  remark: ['referee', ...writers],
  judge: ['referee'],
  rerun: ['referee', ...writers],
  edit: writers,
  publish: writers,
  adopt: writers,
  invite: ['owner'],
  transfer: ['owner'],
  show: ['owner'],
  link: ['owner'],
  delete: ['owner'],
};

/** What a link opens is one edition, to be looked at. */
const byLink: ReadonlySet<Action> = new Set<Action>(['read', 'export']);

const readable: readonly Action[] = ['visit', 'keep', 'read', 'export'];

/** What an access token of each scope opens, of what its person may. A token manages neither accounts nor rights. */
const scopeTable: Readonly<Record<Scope, readonly Action[]>> = {
  read: readable,
  write: [...readable, 'make', 'fork', 'remark', 'judge', 'rerun', 'edit'],
  publish: [...readable, 'publish', 'adopt'],
};

function hats(standing: Standing): readonly Hat[] {
  const { person, steward, on } = standing;
  const own: Hat[] = ['anyone'];
  if (person !== null) own.push('person');
  if (person !== null && steward) own.push('steward');
  if (on === null) return own;
  if (on.linked !== null || on.visibility === 'public') own.push(person === null ? 'guest' : 'passer');
  if (on.role !== null && on.linked === null) own.push(on.role);
  return own;
}

/** Whether someone who stands there may do that. Pure; the only place that decides it. */
export function may(standing: Standing, action: Action): boolean {
  if (standing.on !== null && standing.on.linked !== null && !byLink.has(action)) return false;
  if (standing.scopes?.some((scope) => scopeTable[scope].includes(action)) === false) return false;
  return hats(standing).some((hat) => table[action].includes(hat));
}

/** All actions that someone who stands there may do, in the order of the contract. */
export function actionsOf(standing: Standing): Action[] {
  return actions.filter((action) => may(standing, action));
}

/** The scopes of access tokens that open an action, to those who may do it at all; none: no token does. */
export const scopesOf = (action: Action): Scope[] => scopes.filter((scope) => scopeTable[scope].includes(action));
