import { beforeAll, describe, expect, it } from 'vitest';
import { ownPath } from '../../server/routes/sign-in.ts';
import { type Client, person, type Server, server, signInAs, visitor } from './support/client.ts';

let here: Server;
beforeAll(async () => {
  here = await server();
});

describe('signing in', () => {
  it('when a visitor looks, then there is nobody and no cookie', async () => {
    const client = visitor(here);
    expect(await client.ask('getMe')).toEqual({ person: null, may: ['visit'] });
    expect(client.cookies.size).toBe(0);
    expect(await client.ask('getSignIn')).toEqual({ ways: [{ way: 'github', href: '/auth/github', standIn: true }] });
  });

  it('when a person is chosen on the stand-in page, then they are signed in and back where they were', async () => {
    const client = visitor(here);
    const end = await signInAs(client, 'rokafor', '/notebooks/x?y=1');
    expect(end.status).toBe(302);
    expect(end.headers.get('location')).toBe('/notebooks/x?y=1');
    const me = await client.ask('getMe');
    expect(me.person).toMatchObject({ handle: 'rokafor', name: 'R. Okafor', steward: false });
    expect(me.may).toContain('keep');
  });

  it('when the same account signs in again, then it is the same person, also twice at once', async () => {
    const both = await Promise.all([person(here, 'lbrandt'), person(here, 'lbrandt')]);
    const ids = await Promise.all(both.map(async (client) => (await client.ask('getMe')).person?.id));
    expect(ids[0]).toBeDefined();
    expect(new Set(ids).size).toBe(1);
  });

  it('when the state is not the one given out, then nobody is signed in', async () => {
    const client = visitor(here);
    const begin = await client.fetch('/auth/github');
    const back = await client.fetch(`${begin.headers.get('location') ?? ''}&as=rokafor`);
    const forged = new URL(back.headers.get('location') ?? '');
    forged.searchParams.set('state', 'forged');
    const end = await client.fetch(`${forged.pathname}${forged.search}`);
    expect(end.headers.get('location')).toBe('/sign-in?failed=refused');
    expect((await client.ask('getMe')).person).toBeNull();
  });

  it('when a code is used twice, then the second use signs nobody in', async () => {
    const [first, second] = [visitor(here), visitor(here)];
    const begin = await first.fetch('/auth/github');
    const back = new URL(
      (await first.fetch(`${begin.headers.get('location') ?? ''}&as=rokafor`)).headers.get('location') ?? '',
    );
    await first.fetch(`${back.pathname}${back.search}`);
    expect((await first.ask('getMe')).person?.handle).toBe('rokafor');
    const again = await second.fetch('/auth/github');
    const state = new URL(again.headers.get('location') ?? '', here.url).searchParams.get('state') ?? '';
    back.searchParams.set('state', state);
    const end = await second.fetch(`${back.pathname}${back.search}`);
    expect(end.headers.get('location')).toBe('/sign-in?failed=unreachable');
    expect((await second.ask('getMe')).person).toBeNull();
  });

  it('when the session was known before the sign-in, then it has another id after it', async () => {
    const client = visitor(here);
    await client.fetch('/auth/github');
    const before = client.cookies.get('gaugewright');
    await signInAs(client, 'mitsuno');
    expect(before).toBeDefined();
    expect(client.cookies.get('gaugewright')).not.toBe(before);
  });

  it.each(['//elsewhere.example', '/\\elsewhere.example', 'https://elsewhere.example', 'x', '/\t/elsewhere.example'])(
    'when %j is asked for as target, then the front page is it',
    (to) => {
      expect(ownPath(to)).toBe('/');
    },
  );

  it('when the stand-in page is told to lead elsewhere, then it refuses', async () => {
    const path = '/auth/stand-in/github/login/oauth/authorize?as=rokafor&redirect_uri=https://elsewhere.example/';
    expect((await visitor(here).fetch(path)).status).toBe(400);
  });
});

describe('sessions', () => {
  let one: Client, two: Client;
  beforeAll(async () => {
    one = await person(here, 'tvasara');
    two = await person(here, 'tvasara');
  });

  it('when one session ends another, then that one is signed out and not the first', async () => {
    const { items } = await one.ask('listSessions');
    expect(items).toHaveLength(2);
    const other = items.find((session) => !session.current);
    await one.ask('endSession', { params: { session: other?.id ?? '' } });
    expect((await two.ask('getMe')).person).toBeNull();
    expect((await one.ask('getMe')).person?.handle).toBe('tvasara');
  });

  it('when someone names the session of another, then there is none', async () => {
    const stranger = await person(here, 'dquell');
    const [session] = (await one.ask('listSessions')).items;
    expect(await stranger.refused('endSession', { params: { session: session?.id ?? '' } })).toMatchObject({
      status: 404,
    });
    expect((await one.ask('getMe')).person?.handle).toBe('tvasara');
  });

  it('when the server starts again, then one is still signed in; when one signs out, then no more', async () => {
    await here.restart();
    expect((await one.ask('getMe')).person?.handle).toBe('tvasara');
    const cookie = new Map(one.cookies);
    await one.ask('signOut');
    for (const [name, value] of cookie) one.cookies.set(name, value);
    expect((await one.ask('getMe')).person).toBeNull();
  });
});
