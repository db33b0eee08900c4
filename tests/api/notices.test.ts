import { beforeAll, describe, expect, it } from 'vitest';
import { writeDigests } from '../../server/services/post.ts';
import { notify } from '../../server/services/notices.ts';
import { readStopToken, stopToken } from '../../server/mail/stops.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';
import { mailbox, mailTo } from './support/mail.ts';

let here: Server, reader: Client, id: string, notebook: string, other: string;
const address = 'd.quell@marrowfield.example';
beforeAll(async () => {
  here = await server({ FAKES: 'github,mail' });
  const owner = await person(here, 'rokafor');
  reader = await person(here, 'dquell');
  id = (await reader.ask('getMe')).person?.id ?? '';
  const make = async (title: string): Promise<string> => {
    const made = await owner.ask('createNotebook', { body: { title } });
    await owner.ask('addMember', { params: { notebook: made.id }, body: { handle: 'dquell', role: 'reader' } });
    return made.id;
  };
  notebook = await make('Bonds');
  other = await make('Walls');
});

const news = (text: string, about = notebook): Promise<void> =>
  here.database.transaction((tx) =>
    notify(tx, { to: [id], kind: 'remark', text, by: null, notebook: about, path: `/notebooks/${about}` }),
  );
const queued = async (): Promise<string[]> => {
  const { rows } = await here.database.pool.query<{ subject: string }>(
    `select subject from mails where "to" = $1 order by created_at, id`,
    [address],
  );
  return rows.map(({ subject }) => subject);
};

describe('notices', () => {
  it('when someone is let in, then they are told in the product and by mail, with a way to stop it', async () => {
    const { items } = await reader.ask('listNotices');
    expect(items.map(({ text, read }) => [text, read])).toEqual([
      ['R. Okafor lets you in on “Walls”, as reader.', false],
      ['R. Okafor lets you in on “Bonds”, as reader.', false],
    ]);
    expect((await reader.ask('getMe')).person?.unread).toBe(2);
    const mail = await mailTo(here, address, 2);
    expect(mail.text).toContain(`${here.url}/notebooks/`);
    expect(mail.headers['list-unsubscribe-post']).toBe('List-Unsubscribe=One-Click');
    expect(mail.headers['auto-submitted']).toBe('auto-generated');
  });

  it('when some or all are read, then the count follows, and unread ones can be had alone', async () => {
    const { items } = await reader.ask('listNotices', { query: { limit: 1 } });
    expect(await reader.ask('readNotices', { body: { notices: [items[0]?.id ?? ''] } })).toEqual({ unread: 1 });
    expect((await reader.ask('listNotices', { query: { show: 'unread' } })).items).toHaveLength(1);
    expect(await reader.ask('readNotices', { body: { notices: 'all' } })).toEqual({ unread: 0 });
    expect((await reader.ask('getMe')).person?.unread).toBe(0);
  });

  it('when someone names the notice of another, then it stays unread', async () => {
    await news('For D. Quell.');
    const [first] = (await reader.ask('listNotices')).items;
    const stranger = await person(here, 'mitsuno');
    await stranger.ask('readNotices', { body: { notices: [first?.id ?? ''] } });
    expect((await reader.ask('getMe')).person?.unread).toBe(1);
    expect((await stranger.ask('listNotices')).items).toEqual([]);
  });

  it('when many came, then pages of them follow without gap or repetition', async () => {
    for (let number = 0; number < 7; number += 1) await news(`Notice ${String(number)}.`);
    const seen: string[] = [];
    let after: string | undefined;
    do {
      const page = await reader.ask('listNotices', { query: { limit: 3, ...(after === undefined ? {} : { after }) } });
      seen.push(...page.items.map((item) => item.id));
      after = page.next ?? undefined;
    } while (after !== undefined);
    expect(new Set(seen).size).toBe(seen.length);
    expect(seen.length).toBeGreaterThanOrEqual(9);
  });

  it('when one’s own deed is news, then one is not told', async () => {
    const before = (await reader.ask('listNotices')).items.length;
    await here.database.transaction((tx) =>
      notify(tx, { to: [id], kind: 'remark', text: 'Own.', by: id, notebook, path: '/' }),
    );
    expect((await reader.ask('listNotices')).items).toHaveLength(before);
  });

  it('when what happened is undone, then nobody was told', async () => {
    const before = await queued();
    const failing = here.database.transaction(async (tx) => {
      await notify(tx, { to: [id], kind: 'remark', text: 'Undone.', by: null, notebook, path: '/' });
      throw new Error('undone');
    });
    await expect(failing).rejects.toThrow('undone');
    expect(await queued()).toEqual(before);
    expect((await reader.ask('listNotices')).items[0]?.text).not.toBe('Undone.');
  });
});

describe('mail with notices', () => {
  it('when it is off, off for one notebook, or on for one alone, then it comes as set; notices come all the same', async () => {
    const settings = await reader.ask('followNotebook', { params: { notebook }, body: { mail: 'off' } });
    expect(settings).toEqual({ mail: 'immediate', notebooks: [{ notebook, title: 'Bonds', mail: 'off' }] });
    const before = (await queued()).length;
    await news('Silent.');
    await news('Loud.', other);
    expect((await queued()).slice(before)).toEqual(['Loud.']);
    await reader.ask('setNoticeMail', { body: { mail: 'off' } });
    await reader.ask('followNotebook', { params: { notebook }, body: { mail: 'immediate' } });
    await news('Loud after all.');
    await news('Silent now.', other);
    expect((await queued()).slice(before + 1)).toEqual(['Loud after all.']);
    expect((await reader.ask('listNotices')).items.slice(0, 2).map(({ text }) => text)).toEqual([
      'Silent now.',
      'Loud after all.',
    ]);
    await reader.ask('followNotebook', { params: { notebook }, body: { mail: null } });
  });

  it('when it is daily, then one mail comes at the hour, with all that was not read, and only once', async () => {
    await reader.ask('setNoticeMail', { body: { mail: 'daily' } });
    await reader.ask('readNotices', { body: { notices: 'all' } });
    const before = (await queued()).length;
    await news('First of the day.');
    await news('Read meanwhile.');
    const [latest] = (await reader.ask('listNotices')).items;
    await reader.ask('readNotices', { body: { notices: [latest?.id ?? ''] } });
    await news('Second of the day.', other);
    // Before the hour nothing goes; a day later all of it does.
    await writeDigests(here.database, new Date());
    expect((await queued()).length).toBe(before);
    const tomorrow = new Date(Date.now() + 24 * 60 * 60 * 1000);
    await Promise.all([writeDigests(here.database, tomorrow), writeDigests(here.database, tomorrow)]);
    expect((await queued()).slice(before)).toEqual(['2 notices from your notebooks']);
    const mail = await mailTo(here, address, before + 1);
    expect(mail.text.indexOf('First of the day.')).toBeLessThan(mail.text.indexOf('Second of the day.'));
    expect(mail.text).not.toContain('Read meanwhile.');
  });

  it('when its link is followed, then it asks; when it is posted, as mail programs do, then such mail stops', async () => {
    await reader.ask('setNoticeMail', { body: { mail: 'immediate' } });
    await news('Stop this.');
    const mail = await mailTo(here, address, (await queued()).length);
    const [, at = ''] = /<(.+)>/.exec(mail.headers['list-unsubscribe'] ?? '') ?? [];
    const asked = await fetch(at);
    expect([asked.status, (await reader.ask('getNoticeSettings')).notebooks]).toEqual([200, []]);
    const program = await fetch(at, { method: 'POST', body: new URLSearchParams({ 'List-Unsubscribe': 'One-Click' }) });
    expect(program.status).toBe(200);
    expect((await reader.ask('getNoticeSettings')).notebooks).toEqual([{ notebook, title: 'Bonds', mail: 'off' }]);
    expect((await fetch(at.slice(0, -3), { method: 'POST' })).status).toBe(404);
  });

  it('when a stop is not signed by this installation, then it stops nothing', () => {
    const stops = { person: id, notebook };
    const token = stopToken('one secret', stops);
    expect(readStopToken('one secret', token)).toEqual(stops);
    expect(readStopToken('another secret', token)).toBeNull();
    const [, signature = ''] = token.split('.');
    const forged = `${Buffer.from(`${notebook}.${id}`).toString('base64url')}.${signature}`;
    expect(readStopToken('one secret', forged)).toBeNull();
    expect(readStopToken('one secret', '')).toBeNull();
  });

  it('when a stand-in mail page is read, then subjects and texts stand there as text, with links that can be followed', async () => {
    await reader.ask('followNotebook', { params: { notebook }, body: { mail: 'immediate' } });
    const before = (await mailbox(here, address)).length;
    await news('<img src=x onerror=alert(1)> & “more”');
    await mailTo(here, address, before + 1);
    const page = await (await visitor(here).fetch(`/auth/stand-in/mail?to=${address}`)).text();
    expect(page).toContain('&#60;img src=x onerror=alert(1)&#62;');
    expect(page).not.toContain('<img');
    expect(page).toContain(`<a href="${here.url}/notebooks/${notebook}">`);
  });
});

describe('events for one person', () => {
  it('when a notice comes, then their open pages hear it, and nobody else’s', async () => {
    const stop = new AbortController();
    const hear = async (client: Client): Promise<() => Promise<string>> => {
      const answer = await client.fetch('/api/me/live', { signal: stop.signal });
      const stream = answer.body?.pipeThrough(new TextDecoderStream()).getReader();
      return async () => (await stream?.read())?.value ?? '';
    };
    const mine = await hear(reader);
    const stranger = await hear(await person(here, 'mitsuno'));
    expect(await mine()).toContain('retry:');
    expect(await stranger()).toContain('retry:');
    const next = mine();
    await news('Live.');
    expect(await next).toMatch(/^event: notices\ndata: {"unread":\d+}/);
    const silence = await Promise.race([stranger(), new Promise((resolve) => setTimeout(resolve, 300, 'nothing'))]);
    expect(silence).toBe('nothing');
    stop.abort();
  });

  it('when a notebook on one’s shelf changes, then one hears it once for many changes at a time', async () => {
    const stop = new AbortController();
    const answer = await reader.fetch('/api/me/live', { signal: stop.signal });
    const stream = answer.body?.pipeThrough(new TextDecoderStream()).getReader();
    let heard = '';
    const listening = (async () => {
      for (;;) heard += (await stream?.read())?.value ?? '';
    })().catch(() => undefined);
    const owner = await person(here, 'rokafor');
    for (const title of ['One', 'Two', 'Three']) {
      await owner.ask('changeNotebook', { params: { notebook }, body: { title } });
    }
    for (let look = 0; look < 50 && !heard.includes('event: shelf'); look += 1) {
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
    await new Promise((resolve) => setTimeout(resolve, 1_500));
    expect(heard.split('event: shelf')).toHaveLength(2);
    expect(heard).toContain(`data: {"notebook":"${notebook}"}`);
    stop.abort();
    await listening;
  });
});
