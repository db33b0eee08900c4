import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { noRoad, type Outgoing, type Road, Unsendable } from '../../server/mail/road.ts';
import { sendNext } from '../../server/services/post.ts';
import { type Database, openDatabase } from '../../server/db/connection.ts';
import { giveUpLate, insertMail } from '../../server/db/queries/mails.ts';
import { freshDatabase } from '../support/database.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';
import { byMail } from './support/mail.ts';

let here: Server, steward: Client;
beforeAll(async () => {
  here = await server({
    FAKES: 'github,mail',
    STEWARDS: 'keeper@marrowfield.example, Y.Sandoval@marrowfield.example',
  });
  steward = await person(here, 'ysandoval');
});

describe('stewards', () => {
  it('when an address of the settings signs in, by mail or with GitHub, then its person is a steward, and nobody else', async () => {
    const byLink = await byMail(here, 'keeper@marrowfield.example', 'Keeper');
    for (const client of [steward, byLink]) {
      expect((await client.ask('getMe')).person?.steward).toBe(true);
      expect((await client.ask('getMe')).may).toContain('steward');
    }
    expect((await (await person(here, 'rokafor')).ask('getMe')).may).not.toContain('steward');
  });

  it('when an account is closed, then its person is out at once and does not come in again, until it is opened', async () => {
    const client = await person(here, 'dquell');
    const { secret } = await client.ask('createToken', { body: { name: 'x', scopes: ['read'] } });
    const id = (await client.ask('getMe')).person?.id ?? '';
    const kept = await steward.ask('changeKeptPerson', { params: { person: id }, body: { suspended: true } });
    expect(kept.suspendedAt).not.toBeNull();
    expect((await client.ask('getMe')).person).toBeNull();
    const script = await fetch(new URL('/api/shelf', here.url), { headers: { Authorization: `Bearer ${secret}` } });
    expect(script.status).toBe(401);
    expect((await (await person(here, 'dquell')).ask('getMe')).person).toBeNull();
    await steward.ask('changeKeptPerson', { params: { person: id }, body: { suspended: false } });
    expect((await (await person(here, 'dquell')).ask('getMe')).person?.id).toBe(id);
  });

  it('when a steward would take their own mark or account away, then another one has to', async () => {
    const me = (await steward.ask('getMe')).person?.id ?? '';
    for (const body of [{ steward: false }, { suspended: true }]) {
      expect(await steward.refused('changeKeptPerson', { params: { person: me }, body })).toMatchObject({
        status: 409,
      });
    }
    const other = await person(here, 'tvasara');
    const id = (await other.ask('getMe')).person?.id ?? '';
    await steward.ask('changeKeptPerson', { params: { person: id }, body: { steward: true } });
    await other.ask('changeKeptPerson', { params: { person: me }, body: { steward: false } });
    expect(await steward.refused('listKeptPeople')).toMatchObject({ status: 403 });
    await other.ask('changeKeptPerson', { params: { person: me }, body: { steward: true } });
  });

  it('when people are looked for, then words find them by name, handle or address, page by page', async () => {
    const found = await steward.ask('listKeptPeople', { query: { q: 'okafor marrow' } });
    expect(found.items.map(({ handle }) => handle)).toEqual(['rokafor']);
    expect((await steward.ask('listKeptPeople', { query: { q: '%' } })).items).toEqual([]);
    const seen: string[] = [];
    let after: string | undefined;
    do {
      const page = await steward.ask('listKeptPeople', {
        query: { limit: 2, ...(after === undefined ? {} : { after }) },
      });
      seen.push(...page.items.map(({ id }) => id));
      after = page.next ?? undefined;
    } while (after !== undefined);
    expect([seen.length, new Set(seen).size]).toEqual([5, 5]);
  });

  it('when they look at the notebooks of others, then they find what a passer finds', async () => {
    const owner = await person(here, 'rokafor');
    const { id } = await owner.ask('createNotebook', { body: { title: 'Private' } });
    expect(await steward.refused('getNotebook', { params: { notebook: id } })).toMatchObject({ status: 404 });
  });

  it('when limits are set, then they hold', async () => {
    const limits = { ...(await steward.ask('getLimits')), notebooksPerPerson: 1, jobsPerPerson: 1 };
    expect(await steward.ask('setLimits', { body: limits })).toEqual(limits);
    const owner = await person(here, 'lbrandt');
    const { id } = await owner.ask('createNotebook', {
      body: { title: 'One', entries: [{ kind: 'prose', text: 'x' }] },
    });
    expect(await owner.refused('createNotebook', { body: { title: 'Two' } })).toMatchObject({ status: 409 });
    const params = { notebook: id };
    await owner.ask('publishEdition', { params, body: { summary: 'First' } });
    await owner.ask('insertEntry', { params, body: { kind: 'prose', text: 'y' } });
    expect(await owner.refused('publishEdition', { params, body: { summary: 'Second' } })).toMatchObject({
      status: 409,
    });
    const { items } = await steward.ask('listKeptJobs', { query: { status: 'computing' } });
    expect(items).toMatchObject([{ notebook: id, edition: 1, by: { handle: 'lbrandt' }, status: 'computing' }]);
    expect(await steward.refused('setLimits', { body: { ...limits, jobsPerPerson: 0 } })).toMatchObject({
      status: 400,
    });
  });

  it('when they ask how the installation is, then it counts what is there and says what to look at', async () => {
    const health = await steward.ask('getHealth');
    const { rows } = await here.database.pool.query<{ people: number }>('select count(*)::int as people from people');
    expect(health.people).toBe(rows[0]?.people);
    expect(health.database.version).toMatch(/^\d+/);
    expect(health.editions.computing).toBe(1);
    expect(health.mail.road).toBe('stand-in');
    expect(health.worries).toContain('A stand-in takes all mail: nobody gets any.');
  });
});

describe('the queue of mail', () => {
  const to = 'queue@away.example';
  let quiet: Server, keeper: Client;

  beforeAll(async () => {
    quiet = await server({ STEWARDS: 'y.sandoval@marrowfield.example' });
    keeper = await person(quiet, 'ysandoval');
  });

  it('when no road is set, then mail is given up with the reason, and signing in by mail is not offered', async () => {
    expect((await visitor(quiet).ask('getSignIn')).ways.map(({ way }) => way)).toEqual(['github']);
    expect(await visitor(quiet).refused('askForLink', { body: { email: to } })).toMatchObject({ status: 503 });
    await insertMail(quiet.database, { to, subject: 'No road', text: 'Text', stops: null });
    for (let look = 0; look < 50; look += 1) {
      const { items } = await keeper.ask('listMail', { query: { state: 'failed' } });
      if (items.length > 0) break;
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
    const { items } = await keeper.ask('listMail');
    expect(items).toMatchObject([
      { subject: 'No road', state: 'failed', dueAt: null, error: expect.stringContaining('SMTP') as string },
    ]);
    expect((await keeper.ask('getHealth')).worries).toContain('1 mails could not be sent.');
  });

  it('when a steward has one tried again, then it is sent; one that is sent or unknown is not', async () => {
    const [failed] = (await keeper.ask('listMail', { query: { state: 'failed' } })).items;
    const retried = await keeper.ask('retryMail', { params: { mail: failed?.id ?? '' } });
    expect(retried).toMatchObject({ state: 'waiting', attempts: 0 });
    const none = '00000000-0000-4000-8000-000000000000';
    expect(await keeper.refused('retryMail', { params: { mail: none } })).toMatchObject({ status: 409 });
  });

  it('when nothing is set, then the road of none refuses for good', async () => {
    await expect(noRoad.send({ to, subject: 'x', text: 'x', stopAt: null })).rejects.toThrow(Unsendable);
  });
});

describe('a sender', () => {
  let queue: Database;
  let fresh: Awaited<ReturnType<typeof freshDatabase>>;
  beforeAll(async () => {
    fresh = await freshDatabase();
    queue = openDatabase({ databaseUrl: fresh.url, databaseConnections: 6 }, () => undefined);
  });
  afterAll(async () => {
    await queue.close();
    await fresh.drop();
  });
  const roadThat = (send: (mail: Outgoing) => Promise<void>): Road => ({ kind: 'smtp', send, close: () => undefined });
  const settings = { base: 'http://here.example', secret: 'secret' };
  const put = (subject: string, minutes?: number): Promise<void> =>
    insertMail(queue, {
      to: 'queue@away.example',
      subject,
      text: 'Text',
      stops: null,
      ...(minutes === undefined ? {} : { minutes }),
    });
  const rows = async (): Promise<unknown[]> =>
    (
      await queue.pool.query<Record<string, unknown>>(
        `select subject, state, attempts, error, text, due_at > now() + interval '5 seconds' as later from mails order by subject`,
      )
    ).rows;

  it('when the other side is away, then a mail is tried again later; when it refuses for good, then it is given up', async () => {
    await put('Again');
    const away = roadThat(() => Promise.reject(new Error('connection refused')));
    expect(await sendNext(queue, away, settings)).toBe(true);
    expect(await rows()).toMatchObject([{ state: 'waiting', attempts: 1, error: 'connection refused', later: true }]);
    expect(await sendNext(queue, away, settings)).toBe(false);
    await queue.pool.query(`update mails set due_at = now() - interval '1 second'`);
    const no = roadThat(() => Promise.reject(new Unsendable('550 no such user')));
    expect(await sendNext(queue, no, settings)).toBe(true);
    expect(await rows()).toMatchObject([{ state: 'failed', attempts: 2, error: '550 no such user', text: 'Text' }]);
  });

  it('when it was tried eight times, then it is given up', async () => {
    await queue.pool.query('delete from mails');
    await put('Eight');
    const away = roadThat(() => Promise.reject(new Error('timeout')));
    for (let attempt = 1; attempt <= 8; attempt += 1) {
      expect(await rows()).toMatchObject([{ state: 'waiting', attempts: attempt - 1 }]);
      await queue.pool.query(`update mails set due_at = now() - interval '1 second'`);
      await sendNext(queue, away, settings);
    }
    expect(await rows()).toMatchObject([{ state: 'failed', attempts: 8 }]);
  });

  it('when several look at once, then each mail goes once', async () => {
    await queue.pool.query('delete from mails');
    const wanted = ['A', 'B', 'C', 'D', 'E', 'F', 'G', 'H'];
    for (const subject of wanted) await put(subject);
    const sent: string[] = [];
    const slow = roadThat(async ({ subject }) => {
      await new Promise((resolve) => setTimeout(resolve, 5));
      sent.push(subject);
    });
    const hand = async (): Promise<void> => {
      while (await sendNext(queue, slow, settings));
    };
    await Promise.all([hand(), hand(), hand()]);
    expect([...sent].sort()).toEqual(wanted);
    expect(await rows()).toEqual(
      wanted.map((subject) => expect.objectContaining({ subject, state: 'sent', text: null }) as unknown),
    );
  });

  it('when what a mail carries is of no use any more, then it is not sent but given up', async () => {
    await queue.pool.query('delete from mails');
    await put('Late', 20);
    await queue.pool.query(`update mails set useless_at = now() - interval '1 second'`);
    const sent: string[] = [];
    expect(
      await sendNext(
        queue,
        roadThat(({ subject }) => Promise.resolve(void sent.push(subject))),
        settings,
      ),
    ).toBe(false);
    await giveUpLate(queue);
    expect(await rows()).toMatchObject([{ subject: 'Late', state: 'failed', text: null }]);
    expect(sent).toEqual([]);
  });
});
