import { beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { actionsOf, may, type Standing } from '../../server/rights.ts';
import { address, type EndpointName, endpoints, writeHeader } from '../../shared/contracts/endpoints.ts';
import { actions, type Action, roles, visibilities, type Visibility } from '../../shared/contracts/rights.ts';
import type { Limits } from '../../shared/contracts/steward.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

/**
 * Who may what on a notebook, written out by hand from the table of section 8 of the design: one column for each kind of person,
 * as letters in the order of `columns`; `x` allowed, `-` not. A public notebook may also be read by those without a role.
 */
const columns = ['visitor', 'passer', 'reader', 'referee', 'coauthor', 'owner'] as const;
type Column = (typeof columns)[number];
const expected: Readonly<Record<Visibility, Partial<Record<Action, string>>>> = {
  private: {
    read: '--xxxx',
    export: '--xxxx',
    fork: '--xxxx',
    leave: '--xxx-',
    follow: '--xxxx',
    remark: '---xxx',
    judge: '---x--',
    rerun: '---xxx',
    edit: '----xx',
    publish: '----xx',
    adopt: '----xx',
    invite: '-----x',
    transfer: '-----x',
    show: '-----x',
    link: '-----x',
    delete: '-----x',
  },
  public: {
    read: 'xxxxxx',
    export: 'xxxxxx',
    fork: '-xxxxx',
    leave: '--xxx-',
    follow: '--xxxx',
    remark: '---xxx',
    judge: '---x--',
    rerun: '---xxx',
    edit: '----xx',
    publish: '----xx',
    adopt: '----xx',
    invite: '-----x',
    transfer: '-----x',
    show: '-----x',
    link: '-----x',
    delete: '-----x',
  },
};

const allowed = (visibility: Visibility, action: Action, column: Column): boolean =>
  expected[visibility][action]?.[columns.indexOf(column)] === 'x';

/** Everyone who asks every row, the owner last; a steward is at a notebook what a passer is. */
const everyone = ['steward', ...columns] as const;
type Asking = (typeof everyone)[number];
const atNotebook = (who: Asking): Column => (who === 'steward' ? 'passer' : who);

describe('the table of rights', () => {
  const standing = (column: Column, visibility: Visibility, steward = false): Standing => ({
    person: column === 'visitor' ? null : 'p',
    steward,
    on: { notebook: 'n', visibility, role: roles.find((role) => role === column) ?? null, linked: null },
  });

  it('names every action of a notebook, and grants what the design says, to stewards no more', () => {
    const ofNotebook = actions.filter((action) => !['visit', 'keep', 'make', 'account', 'steward'].includes(action));
    for (const visibility of visibilities) {
      expect(Object.keys(expected[visibility]).sort()).toEqual([...ofNotebook].sort());
      for (const action of ofNotebook) {
        for (const column of columns) {
          const right = allowed(visibility, action, column);
          const where = `${visibility} ${action} ${column}`;
          expect([where, may(standing(column, visibility), action)]).toEqual([where, right]);
          expect([where, may(standing(column, visibility, column !== 'visitor'), action)]).toEqual([where, right]);
        }
      }
    }
  });

  it('gives a link no more than reading and exporting, whoever holds it', () => {
    for (const holder of [null, 'p']) {
      const on = { notebook: 'n', visibility: 'private', role: 'owner', linked: 'e' } as const;
      expect(actionsOf({ person: holder, steward: true, on })).toEqual(['read', 'export']);
    }
  });
});

describe('every row of the table of endpoints', () => {
  let here: Server;
  const clients = new Map<Asking, Client>();
  let notebook = '',
    entry = '',
    token = '',
    link = '',
    reader = '';

  beforeAll(async () => {
    here = await server({
      FAKES: 'github,mail',
      STEWARDS: 'y.sandoval@marrowfield.example',
      WRITES_PER_MINUTE: '5000',
      SIGN_INS_PER_MINUTE: '5000',
      REQUESTS_PER_MINUTE: '50000',
    });
    const logins = {
      passer: 'dquell',
      reader: 'tvasara',
      referee: 'mitsuno',
      coauthor: 'lbrandt',
      owner: 'rokafor',
      steward: 'ysandoval',
    };
    clients.set('visitor', visitor(here));
    for (const [column, login] of Object.entries(logins)) clients.set(column as Asking, await person(here, login));
    // No worker seals what is published here, and every row publishes.
    await clients.get('steward')?.ask('setLimits', { body: bodies.setLimits as Limits });
  });

  /** A notebook with one entry, one edition, one link and a person in each role; made anew, since the rows change it. */
  beforeEach(async () => {
    const owner = clients.get('owner') as Client;
    const entries = [{ kind: 'statements' as const, text: 'audit x' }];
    const made = await owner.ask('createNotebook', { body: { title: 'Matrix', entries } });
    notebook = made.id;
    entry = made.entries[0]?.id ?? '';
    const params = { notebook };
    for (const [handle, role] of [
      ['tvasara', 'reader'],
      ['mitsuno', 'referee'],
      ['lbrandt', 'coauthor'],
    ] as const) {
      const member = await owner.ask('addMember', { params, body: { handle, role } });
      if (role === 'reader') reader = member.person.id;
    }
    await owner.ask('publishEdition', { params, body: { summary: 'First' } });
    ({ id: link, token } = await owner.ask('createLink', { params, body: { edition: 1 } }));
  });

  const nobody = '00000000-0000-4000-8000-000000000000';
  const unknown = { way: nobody, key: nobody, invitation: nobody, mail: nobody, job: nobody, worked: 'ising-ring' };
  const ofReviews = {
    sending: nobody,
    variant: nobody,
    remark: nobody,
    verdict: nobody,
    claim: nobody,
    binned: nobody,
  };
  const queries: Partial<Record<EndpointName, Record<string, string>>> = { compare: { left: 'draft', right: '1' } };
  const bodies: Partial<Record<EndpointName, object>> = {
    changeNotebook: { title: 'Other' },
    setVisibility: { visibility: 'private' },
    forkNotebook: {},
    insertEntry: { kind: 'prose', text: 'x' },
    saveEntry: { text: 'audit y' },
    moveEntry: { before: null },
    publishEdition: { summary: 'Second' },
    createLink: { edition: 1 },
    addMember: { handle: 'dquell', role: 'reader' },
    changeMember: { role: 'referee' },
    createNotebook: { title: 'New' },
    importNotebook: { source: '# x' },
    askForLink: { email: 'someone@marrowfield.example' },
    useLink: { token: 'a link that nobody ever was sent' },
    changeAccount: { affiliation: 'Marrowfield' },
    addAddress: { email: 'other@marrowfield.example' },
    confirmAddress: { token: 'a link that nobody ever was sent' },
    deleteAccount: { handle: 'nobody' },
    createToken: { name: 'Matrix', scopes: ['read'] },
    invite: { email: 'invited@marrowfield.example', role: 'reader' },
    lookAtInvitation: { token: 'a link that nobody ever was sent' },
    acceptInvitation: { invitation: nobody },
    declineInvitation: { invitation: nobody },
    readNotices: { notices: 'all' },
    setNoticeMail: { mail: 'immediate' },
    followNotebook: { mail: null },
    sendVariants: { letter: 'Please look.' },
    decideVariant: { what: 'adopted' },
    replyToRemark: { text: 'Yes.' },
    rewordRemark: { text: 'No.' },
    settleRemark: { state: 'settled' },
    judgeEdition: { word: 'stands', reason: 'It does.' },
    judgeClaim: { word: 'stands', reason: 'It does.' },
    rerunClaims: {},
    archiveNotebook: { archived: false },
    previewImport: { source: '# x' },
    askQuestion: { source: 'audit x', question: '0'.repeat(64) },
    setLimits: {
      jobsPerPerson: 1000,
      notebooksPerPerson: 10_000,
      invitationsPerDay: 1000,
      accessTokensPerPerson: 100,
      openSignUp: true,
    },
  };

  /** Bodies that name what the notebook of the moment has. */
  const ofNow = (name: EndpointName): object | undefined =>
    name === 'transferNotebook'
      ? { person: reader }
      : name === 'makeRemark'
        ? { subject: { what: 'entry', entry }, text: 'Why?' }
        : undefined;

  async function status(name: EndpointName, client: Client): Promise<number> {
    const row = endpoints[name];
    const stop = new AbortController();
    const response = await client.fetch(
      address(
        row,
        {
          ...unknown,
          ...ofReviews,
          notebook,
          entry,
          link,
          token,
          edition: 1,
          person: reader,
          session: 'none',
          format: 'gw',
        },
        queries[name],
      ),
      {
        method: row.method,
        headers: { [writeHeader]: '1', 'Content-Type': 'application/json', 'If-Match': '"1"' },
        signal: stop.signal,
        ...(row.method === 'GET' ? {} : { body: JSON.stringify(ofNow(name) ?? bodies[name] ?? {}) }),
      },
    );
    if (row.form === 'events') stop.abort();
    return response.status;
  }

  /** What a row may answer to whom: 404 where they may not read, 401 or 403 where they may read and not do this, else anything. */
  function verdict(name: EndpointName, visibility: Visibility, who: Asking): number | 'allowed' {
    const { of, action } = endpoints[name];
    if (of === 'link' || action === 'visit' || (action === 'steward' && who === 'steward')) return 'allowed';
    const column = atNotebook(who);
    const refusal = column === 'visitor' ? 401 : 403;
    if (of === 'installation') return action !== 'steward' && column !== 'visitor' ? 'allowed' : refusal;
    if (!allowed(visibility, 'read', column)) return 404;
    return allowed(visibility, action, column) ? 'allowed' : refusal;
  }

  // Answers to an allowed request that are right all the same: there is no such session, the edition did not fail.
  const alsoRight: Partial<Record<EndpointName, number>> = {
    getCollation: 409,
    sendVariants: 409,
    getVariants: 404,
    withdrawVariants: 404,
    decideVariant: 404,
    replyToRemark: 404,
    rewordRemark: 404,
    settleRemark: 404,
    takeRemarkBack: 404,
    judgeEdition: 409,
    judgeClaim: 409,
    takeVerdictBack: 404,
    rerunClaims: 409,
    restoreNotebook: 404,
    emptyBin: 404,
    useLink: 404,
    confirmAddress: 404,
    removeWayIn: 404,
    deleteAccount: 400,
    revokeToken: 404,
    withdrawInvitation: 404,
    lookAtInvitation: 404,
    acceptInvitation: 404,
    declineInvitation: 404,
    retryMail: 409,
    askQuestion: 404,
    getJob: 404,
    cancelJob: 404,
    getAnswers: 400,
    endSession: 404,
    evaluateEdition: 409,
    publishEdition: 409,
  };

  const names = Object.keys(endpoints) as EndpointName[];
  it.each(visibilities.flatMap((visibility) => names.map((name) => [visibility, name] as const)))(
    'when the notebook is %s, then %s answers each kind of person by the table',
    async (visibility, name) => {
      const owner = clients.get('owner') as Client;
      if (visibility === 'public') await owner.ask('setVisibility', { params: { notebook }, body: { visibility } });
      for (const column of everyone) {
        // Signing out would end the session that the next rows need.
        if (name === 'signOut' && column !== 'visitor') continue;
        const answer = await status(name, clients.get(column) as Client);
        const wanted = verdict(name, visibility, column);
        const row = endpoints[name];
        const right = wanted === 'allowed' ? [row.status, alsoRight[name]].includes(answer) : answer === wanted;
        expect(`${column}: ${String(answer)}${right ? '' : `, not ${String(wanted)}`}`).toBe(
          `${column}: ${String(answer)}`,
        );
        // Back to what the next kind of person is to find.
        if (wanted === 'allowed' && name === 'deleteEntry') {
          await owner.ask('restoreEntry', { params: { notebook, entry } });
        }
        if (wanted === 'allowed' && name === 'holdEntry') {
          await clients.get(column)?.ask('releaseEntry', { params: { notebook, entry } });
        }
        if (wanted === 'allowed' && name === 'leaveNotebook') await giveBack(owner, atNotebook(column));
      }
    },
  );

  async function giveBack(owner: Client, column: Column): Promise<void> {
    const handle = { reader: 'tvasara', referee: 'mitsuno', coauthor: 'lbrandt' }[column as 'reader'];
    await owner.ask('addMember', { params: { notebook }, body: { handle, role: column as 'reader' } });
  }
});
