import { beforeAll, describe, expect, it } from 'vitest';
import { person, type Server, server, signInAs, visitor } from './support/client.ts';
import { byMail, mailbox, mailTo, tokenIn } from './support/mail.ts';

let here: Server;
beforeAll(async () => {
  here = await server({ FAKES: 'github,mail', SIGN_INS_PER_MINUTE: '500' });
});

const askFor = async (email: string, to?: string): Promise<string> => {
  const address = email.trim().toLowerCase();
  const before = (await mailbox(here, address)).length;
  await visitor(here).ask('askForLink', { body: { email, ...(to === undefined ? {} : { to }) } });
  return tokenIn(await mailTo(here, address, before + 1));
};

describe('a one-time link', () => {
  it('when a new address asks, then its mail signs in once, after a name was given, and leads where it was asked from', async () => {
    const token = await askFor(' Ana@Field.Example ', '/notebooks/x');
    const client = visitor(here);
    const nameless = await client.refused('useLink', { body: { token } });
    expect(nameless).toMatchObject({ status: 409, nameNeeded: true, email: 'ana@field.example' });
    expect((await client.ask('getMe')).person).toBeNull();
    expect(await client.ask('useLink', { body: { token, name: 'Ána Field' } })).toEqual({ to: '/notebooks/x' });
    const me = await client.ask('getMe');
    expect(me.person).toMatchObject({ handle: 'ana-field', name: 'Ána Field', email: 'ana@field.example' });
    expect(await visitor(here).refused('useLink', { body: { token, name: 'Second' } })).toMatchObject({ status: 404 });
  });

  it('when a known address asks again, then it is the same person, and no name is needed', async () => {
    const first = await byMail(here, 'ben@field.example', 'Ben');
    const token = await askFor('ben@field.example');
    const second = visitor(here);
    await second.ask('useLink', { body: { token } });
    expect((await second.ask('getMe')).person?.id).toBe((await first.ask('getMe')).person?.id);
  });

  it('when known and unknown addresses ask, then the answers are the same', async () => {
    await byMail(here, 'cleo@field.example', 'Cleo');
    const answers = await Promise.all(
      ['cleo@field.example', 'nobody@field.example'].map((email) =>
        visitor(here).ask('askForLink', { body: { email } }),
      ),
    );
    expect(answers[0]).toEqual(answers[1]);
  });

  it('when it is too old, then it opens nothing', async () => {
    const token = await askFor('dora@field.example');
    await here.database.pool.query(`update mail_links set expires_at = now() where email = 'dora@field.example'`);
    expect(await visitor(here).refused('useLink', { body: { token, name: 'Dora' } })).toMatchObject({ status: 404 });
  });

  it('when one of two is used, then the other one is used up with it', async () => {
    const [one, two] = [await askFor('eli@field.example'), await askFor('eli@field.example')];
    await visitor(here).ask('useLink', { body: { token: two, name: 'Eli' } });
    expect(await visitor(here).refused('useLink', { body: { token: one } })).toMatchObject({ status: 404 });
  });

  it('when it is used twice at once, then one of both signs in', async () => {
    const token = await askFor('fay@field.example');
    const clients = [visitor(here), visitor(here)];
    const tries = await Promise.all(
      clients.map((client) =>
        client.fetch('/api/sign-in/link', {
          method: 'POST',
          headers: { 'Content-Type': 'application/json', 'x-gaugewright': '1' },
          body: JSON.stringify({ token, name: 'Fay' }),
        }),
      ),
    );
    expect(tries.map((answer) => answer.status).sort()).toEqual([200, 404]);
  });

  it('when many are asked for, then an address gets five within an hour and is not told', async () => {
    for (let time = 0; time < 8; time += 1) {
      await visitor(here).ask('askForLink', { body: { email: 'gus@field.example' } });
    }
    const { rows } = await here.database.pool.query(`select 1 from mails where "to" = 'gus@field.example'`);
    expect(rows).toHaveLength(5);
  });

  it('when it was sent, then neither its secret nor the mail is kept', async () => {
    const token = await askFor('hal@field.example');
    let text: unknown = '';
    for (let look = 0; look < 50 && text !== null; look += 1) {
      const { rows } = await here.database.pool.query<{ text: string | null }>(
        `select text from mails where "to" = 'hal@field.example'`,
      );
      text = rows[0]?.text;
      await new Promise((resolve) => setTimeout(resolve, 50));
    }
    expect(text).toBeNull();
    const { rows } = await here.database.pool.query<{ row: string }>('select mail_links::text as row from mail_links');
    expect(rows.some(({ row }) => row.includes(token))).toBe(false);
  });

  it.each(['not an address', 'a@b', 'a@field.example\nbcc: b@field.example', ''])(
    'when %j asks, then it is refused',
    async (email) => {
      expect(await visitor(here).refused('askForLink', { body: { email } })).toMatchObject({ status: 400 });
    },
  );

  it('when one address asks too often within a minute, then it waits', async () => {
    const strict = await server({ FAKES: 'mail', SIGN_INS_PER_MINUTE: '2' });
    for (const email of ['a@field.example', 'b@field.example']) {
      await visitor(strict).ask('askForLink', { body: { email } });
    }
    const problem = await visitor(strict).refused('askForLink', { body: { email: 'c@field.example' } });
    expect(problem).toMatchObject({ status: 429, code: 'too-many' });
  });

  it('when the installation takes nobody new, then an unknown address gets no account, and a known one its own', async () => {
    const closed = await server({ FAKES: 'github,mail', SIGN_INS_PER_MINUTE: '500' });
    await byMail(closed, 'ivo@field.example', 'Ivo');
    await closed.database.pool.query(`insert into limits values ('openSignUp', 0)`);
    await byMail(closed, 'ivo@field.example', 'Ivo');
    const client = visitor(closed);
    await client.ask('askForLink', { body: { email: 'jo@field.example' } });
    const token = tokenIn(await mailTo(closed, 'jo@field.example'));
    expect(await client.refused('useLink', { body: { token, name: 'Jo' } })).toMatchObject({ status: 403 });
    const end = await signInAs(visitor(closed), 'rokafor');
    expect(end.headers.get('location')).toBe('/sign-in?failed=closed');
  });
});

describe('two ways in', () => {
  it('when someone signs in with GitHub and by mail to the same verified address, then it is one person, either way round', async () => {
    const github = await person(here, 'rokafor');
    const mail = await byMail(here, 'r.okafor@marrowfield.example', 'Another name');
    expect((await mail.ask('getMe')).person?.id).toBe((await github.ask('getMe')).person?.id);
    const first = await byMail(here, 'l.brandt@marrowfield.example', 'L. B.');
    const second = await person(here, 'lbrandt');
    expect((await second.ask('getMe')).person).toMatchObject({
      name: 'L. B.',
      id: (await first.ask('getMe')).person?.id,
    });
  });

  it('when an address is added, then only its mail, in the hands of who asked, makes it a way in', async () => {
    const owner = await person(here, 'mitsuno');
    const stranger = await person(here, 'dquell');
    await owner.ask('addAddress', { body: { email: 'itsuno@home.example' } });
    const token = tokenIn(await mailTo(here, 'itsuno@home.example'));
    expect(await stranger.refused('confirmAddress', { body: { token } })).toMatchObject({ status: 404 });
    expect(await visitor(here).refused('useLink', { body: { token, name: 'X' } })).toMatchObject({ status: 404 });
    const account = await owner.ask('confirmAddress', { body: { token } });
    expect(account.addresses).toContain('itsuno@home.example');
    const again = await byMail(here, 'itsuno@home.example', 'X');
    expect((await again.ask('getMe')).person?.id).toBe(account.id);
  });

  it('when a GitHub account is added by someone signed in, then it opens the same account; another’s is refused', async () => {
    const mail = await byMail(here, 'vasara@home.example', 'T. V.');
    const link = async (login: string): Promise<string> => {
      const begin = await mail.fetch('/auth/github?link=1');
      const back = await mail.fetch(`${begin.headers.get('location') ?? ''}&as=${login}`);
      const { pathname, search } = new URL(back.headers.get('location') ?? '', here.url);
      return (await mail.fetch(`${pathname}${search}`)).headers.get('location') ?? '';
    };
    expect(await link('rokafor')).toBe('/account?failed=taken');
    expect(await link('tvasara')).toBe('/account');
    const github = await person(here, 'tvasara');
    expect((await github.ask('getMe')).person?.id).toBe((await mail.ask('getMe')).person?.id);
    const { ways } = await mail.ask('getAccount');
    expect(ways.map(({ way, label }) => [way, label])).toEqual([
      ['email', 'vasara@home.example'],
      ['github', 'tvasara'],
    ]);
  });

  it('when ways in are taken away, then the last one stays, and mail goes to no address that went', async () => {
    const client = await byMail(here, 'one@home.example', 'One');
    await client.ask('addAddress', { body: { email: 'two@home.example' } });
    await client.ask('confirmAddress', { body: { token: tokenIn(await mailTo(here, 'two@home.example')) } });
    const { ways } = await client.ask('getAccount');
    const left = await client.ask('removeWayIn', { params: { way: ways[0]?.id ?? '' } });
    expect(left).toMatchObject({ email: 'two@home.example', addresses: ['two@home.example'] });
    const last = await client.refused('removeWayIn', { params: { way: left.ways[0]?.id ?? '' } });
    expect(last).toMatchObject({ status: 409 });
  });
});
