import { beforeAll, describe, expect, it } from 'vitest';
import { derivation } from './support/engine.ts';
import { takeText } from './support/texts.ts';
import { sealEditionJob } from '../../server/services/sealing.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

let here: Server;
let owner: Client, referee: Client, friend: Client, reader: Client;
beforeAll(async () => {
  here = await server({ WRITES_PER_MINUTE: '5000', REQUESTS_PER_MINUTE: '50000' });
  [owner, referee, friend, reader] = [
    await person(here, 'rokafor'),
    await person(here, 'mitsuno'),
    await person(here, 'lbrandt'),
    await person(here, 'tvasara'),
  ];
});

const setting =
  'lattice square torus 3 x 3\nspins g on links\ncouplings J = 1, h = 0.6\nlaw G(v: vertices) = prod(l: star(v)) g^x[l]';
const model = 'model m = - J sum(p: plaquettes) prod(l: rim(p)) g^z[l] - h sum(l: links) g^x[l]';
const audit = 'audit commute m with G';
const entries = [
  { kind: 'prose' as const, text: 'The pure gauge theory keeps its star law.' },
  ...[setting, model, audit].map((text) => ({ kind: 'statements' as const, text })),
];

async function made(): Promise<string> {
  const { id } = await owner.ask('createNotebook', { body: { title: 'Star law', entries } });
  for (const [handle, role] of [
    ['mitsuno', 'referee'],
    ['lbrandt', 'reader'],
    ['tvasara', 'reader'],
  ] as const) {
    await owner.ask('addMember', { params: { notebook: id }, body: { handle, role } });
  }
  return id;
}

async function publish(notebook: string, summary = 'First'): Promise<void> {
  const { number } = await owner.ask('publishEdition', { params: { notebook }, body: { summary } });
  const { rows } = await here.database.pool.query<{ id: string }>(
    'select id from editions where notebook = $1 and number = $2',
    [notebook, number],
  );
  await sealEditionJob(here.database, derivation, rows[0]?.id ?? '');
}

async function save(client: Client, notebook: string, at: number, text: string): Promise<string> {
  const { entries: all } = await client.ask('getNotebook', { params: { notebook } });
  const entry = all[at];
  if (entry === undefined) throw new Error('no such entry');
  await client.ask('saveEntry', { params: { notebook, entry: entry.id }, version: entry.version, body: { text } });
  return entry.id;
}

const work = () => takeText(here.database);

describe('comparing', () => {
  it('when a sign changed since the edition, then the term and the broken claim are named, and prose as words', async () => {
    const notebook = await made();
    await publish(notebook);
    await save(owner, notebook, 2, model.replace('h sum(l: links) g^x[l]', 'h sum(l: links) g^z[l]'));
    await save(owner, notebook, 0, 'The pure gauge theory breaks its star law.');
    const asked = { params: { notebook }, query: { left: '1', right: 'draft' } };
    expect((await owner.ask('compare', asked)).physics).toBe(null);
    await work();
    const found = await owner.ask('compare', asked);
    expect(found.physics?.models.map(({ terms }) => terms.map(({ what }) => what))).toEqual([['support', 'support']]);
    expect(found.physics?.claims.map(({ what, right }) => [what, right?.grade])).toEqual([['grade', 'refuted']]);
    expect(
      found.entries.map(({ pieces }) => pieces.filter((piece) => piece.in !== 'same').map(({ text }) => text)),
    ).toEqual([['keeps', 'breaks']]);
    expect(found.source).toHaveLength(1);
  });

  it('when statements were reordered and respelled, then nothing differs as physics', async () => {
    const notebook = await made();
    await publish(notebook);
    await save(
      owner,
      notebook,
      2,
      'model m = - h sum(k: links) g^x[k] - J sum(q: plaquettes) g^z[q.3] g^z[q.1] g^z[q.2] g^z[q.4]',
    );
    const asked = { params: { notebook }, query: { left: '1', right: 'draft' } };
    await owner.ask('compare', asked);
    await work();
    expect((await owner.ask('compare', asked)).physics).toEqual({ models: [], declarations: [], claims: [] });
  });

  it('when there is no such edition, or no origin, then that is said', async () => {
    const notebook = await made();
    const wrong = (left: string) => owner.refused('compare', { params: { notebook }, query: { left, right: 'draft' } });
    expect(await wrong('7')).toMatchObject({ status: 404 });
    expect(await wrong('origin')).toMatchObject({ status: 409 });
    expect(await wrong('0')).toMatchObject({ status: 400 });
  });
});

describe('variants', () => {
  async function forked() {
    const notebook = await made();
    await publish(notebook);
    const fork = await friend.ask('forkNotebook', { params: { notebook }, body: { edition: 1, title: 'My copy' } });
    await save(friend, fork.id, 2, model.replace('- h sum(l: links) g^x[l]', '- h sum(l: links) g^z[l]'));
    await save(friend, fork.id, 0, 'The star law, in other words.');
    return { notebook, fork: fork.id };
  }

  it('when a fork changed a sign, then its collation holds both readings and what adopting does to the claims', async () => {
    const { fork } = await forked();
    const first = await friend.ask('getCollation', { params: { notebook: fork } });
    expect(first.variants.map(({ kind, entryKind, claims }) => [kind, entryKind, claims])).toEqual([
      ['changed', 'prose', []],
      ['changed', 'statements', null],
    ]);
    await work();
    const [, second] = (await friend.ask('getCollation', { params: { notebook: fork } })).variants;
    expect(second?.claims?.map(({ what, left, right }) => [what, left?.grade, right?.grade])).toEqual([
      ['grade', 'proved', 'refuted'],
    ]);
    expect([second?.origin, second?.fork]).toEqual([
      model,
      model.replace('- h sum(l: links) g^x', '- h sum(l: links) g^z'),
    ]);
  });

  it('when variants are sent, then the origin adopts one and leaves one with a reason, and the senders hear of it', async () => {
    const { notebook, fork } = await forked();
    const sent = await friend.ask('sendVariants', {
      params: { notebook: fork },
      body: { letter: 'Look at the sign.' },
    });
    expect(sent.variants.map(({ decision }) => decision)).toEqual([null, null]);
    const notices = await owner.ask('listNotices');
    expect(notices.items[0]).toMatchObject({ kind: 'variants', notebook: { id: notebook } });
    const [words, sign] = sent.variants;
    const params = { notebook, sending: sent.id };
    const decide = (variant: string | undefined, body: { what: 'adopted' | 'left'; reason?: string }) => ({
      params: { ...params, variant: variant ?? '' },
      body,
    });
    expect(await owner.refused('decideVariant', decide(sign?.id, { what: 'left' }))).toMatchObject({ status: 400 });
    await owner.ask('decideVariant', decide(sign?.id, { what: 'left', reason: 'It breaks the law.' }));
    const closed = await owner.ask('decideVariant', decide(words?.id, { what: 'adopted' }));
    expect([closed.status, closed.adopted, closed.left]).toEqual(['closed', 1, 1]);
    expect(closed.variants[0]?.decision?.text).toBe('The star law, in other words.');
    // What the origin read before stays on record.
    expect(closed.variants[0]?.origin).toBe('The pure gauge theory keeps its star law.');
    const now = await owner.ask('getNotebook', { params: { notebook } });
    expect(now.entries.map(({ text }) => text)).toEqual(['The star law, in other words.', setting, model, audit]);
    expect(await owner.refused('decideVariant', decide(words?.id, { what: 'adopted' }))).toMatchObject({ status: 409 });
    const back = await friend.ask('getVariants', { params: { notebook: fork, sending: sent.id } });
    expect(back.variants[1]?.decision).toMatchObject({ what: 'left', reason: 'It breaks the law.' });
    const list = await friend.ask('listVariants', { params: { notebook: fork }, query: { which: 'sent' } });
    expect(list.items.map(({ id, status }) => [id, status])).toEqual([[sent.id, 'closed']]);
    // Others have no part in it.
    expect(await reader.refused('getVariants', { params })).toMatchObject({ status: 403 });
    expect(await visitor(here).refused('getVariants', { params })).toMatchObject({ status: 404 });
  });

  it('when both sides changed an entry, then both readings stand, and a text that joins them can be adopted', async () => {
    const { notebook, fork } = await forked();
    await save(owner, notebook, 0, 'The star law, as we see it.');
    const sent = await friend.ask('sendVariants', { params: { notebook: fork }, body: { letter: 'Words.' } });
    const [words] = sent.variants;
    expect(words).toMatchObject({
      bothChanged: true,
      base: 'The pure gauge theory keeps its star law.',
      origin: 'The star law, as we see it.',
      fork: 'The star law, in other words.',
    });
    const body = { what: 'adopted' as const, text: 'The star law, as we see it, in other words.' };
    const params = { notebook, sending: sent.id, variant: words?.id ?? '' };
    const after = await owner.ask('decideVariant', { params, body });
    expect(after.variants[0]).toMatchObject({
      origin: 'The star law, as we see it.',
      fork: 'The star law, in other words.',
    });
    expect((await owner.ask('getNotebook', { params: { notebook } })).entries[0]?.text).toBe(body.text);
  });

  it('when they are withdrawn, then they cannot be decided; and a fork that is like its origin has none to send', async () => {
    const { notebook, fork } = await forked();
    const sent = await friend.ask('sendVariants', { params: { notebook: fork }, body: { letter: 'Words.' } });
    await friend.ask('withdrawVariants', { params: { notebook: fork, sending: sent.id } });
    const params = { notebook, sending: sent.id, variant: sent.variants[0]?.id ?? '' };
    expect(await owner.refused('decideVariant', { params, body: { what: 'adopted' } })).toMatchObject({ status: 409 });
    const plain = await friend.ask('forkNotebook', { params: { notebook }, body: {} });
    const none = { params: { notebook: plain.id }, body: { letter: 'Nothing.' } };
    expect(await friend.refused('sendVariants', none)).toMatchObject({ status: 409 });
  });

  it('when someone writes in the entry, then it is not overwritten', async () => {
    const { notebook, fork } = await forked();
    const sent = await friend.ask('sendVariants', { params: { notebook: fork }, body: { letter: 'Words.' } });
    await owner.ask('addMember', { params: { notebook }, body: { handle: 'tvasara', role: 'coauthor' } });
    const { entries: all } = await owner.ask('getNotebook', { params: { notebook } });
    await reader.ask('holdEntry', { params: { notebook, entry: all[0]?.id ?? '' } });
    const params = { notebook, sending: sent.id, variant: sent.variants[0]?.id ?? '' };
    expect(await owner.refused('decideVariant', { params, body: { what: 'adopted' } })).toMatchObject({ status: 423 });
  });
});

describe('remarks', () => {
  it('when an entry is edited, moved and deleted, then its remark follows, and stays with the edition in the end', async () => {
    const notebook = await made();
    const params = { notebook };
    const { entries: all } = await owner.ask('getNotebook', { params });
    const entry = all[0]?.id ?? '';
    const quote = { exact: 'star law', prefix: 'its ', suffix: '.' };
    const remark = await referee.ask('makeRemark', {
      params,
      body: { subject: { what: 'entry', entry, quote }, text: 'Which one, @rokafor? $\\prod_l g^x_l$' },
    });
    expect([remark.stands, remark.edition, remark.mentions.map(({ handle }) => handle)]).toEqual([
      'here',
      null,
      ['rokafor'],
    ]);
    const notices = await owner.ask('listNotices');
    expect(notices.items[0]).toMatchObject({ kind: 'mention', notebook: { id: notebook } });
    await publish(notebook);
    await save(owner, notebook, 0, 'The Gauss law holds.');
    const only = async () => (await reader.ask('listRemarks', { params })).items[0];
    expect(await only()).toMatchObject({ stands: 'changed', edition: 1 });
    await owner.ask('moveEntry', { params: { notebook, entry }, body: { before: null } });
    await owner.ask('deleteEntry', { params: { notebook, entry } });
    expect(await only()).toMatchObject({ stands: 'gone', edition: 1, state: 'open' });
    const made_ = { params, body: { subject: { what: 'entry' as const, entry }, text: 'Late.' } };
    expect(await referee.refused('makeRemark', made_)).toMatchObject({ status: 409 });
    const onEdition = await referee.ask('makeRemark', { ...made_, body: { ...made_.body, edition: 1 } });
    expect(onEdition).toMatchObject({ madeOn: 1, stands: 'gone', edition: 1 });
  });

  it('when it is answered, settled and taken back, then each is seen, and only its author rewords it', async () => {
    const notebook = await made();
    const params = { notebook };
    const { entries: all } = await owner.ask('getNotebook', { params });
    const subject = {
      what: 'claim' as const,
      entry: all[3]?.id ?? '',
      audit: 'commute',
      subject: 'm',
      statement: 's',
      tex: '',
    };
    const { id } = await referee.ask('makeRemark', { params, body: { subject, text: 'Why?' } });
    const at = { params: { notebook, remark: id } };
    await owner.ask('replyToRemark', { ...at, body: { text: 'Because.' } });
    expect(await owner.refused('rewordRemark', { ...at, body: { text: 'Mine' } })).toMatchObject({ status: 403 });
    expect(await reader.refused('settleRemark', { ...at, body: { state: 'settled' } })).toMatchObject({ status: 403 });
    await owner.ask('settleRemark', { ...at, body: { state: 'settled' } });
    expect((await owner.ask('listRemarks', { params, query: { state: 'open' } })).items).toEqual([]);
    await referee.ask('takeRemarkBack', at);
    const [left] = (await owner.ask('listRemarks', { params })).items;
    expect([left?.text, left?.replies.map(({ text }) => text)]).toEqual([null, ['Because.']]);
    const out = await owner.ask('exportRemarks', { params });
    expect(out).toMatchObject({ type: 'AnnotationCollection', total: 2 });
  });
});

describe('verdicts and reruns', () => {
  const judged = { word: 'fails' as const, reason: 'Look at the overlap.' };

  it('when a referee judges, then the verdict stays with its edition, and replaces their own', async () => {
    const notebook = await made();
    const params = { notebook, edition: 1 };
    await owner.ask('publishEdition', { params: { notebook }, body: { summary: 'First' } });
    expect(await referee.refused('judgeEdition', { params, body: judged })).toMatchObject({ status: 409 });
    const { rows } = await here.database.pool.query<{ id: string }>('select id from editions where notebook = $1', [
      notebook,
    ]);
    await sealEditionJob(here.database, derivation, rows[0]?.id ?? '');
    const { claims } = await referee.ask('getEdition', { params });
    const claim = claims[0]?.id ?? '';
    await referee.ask('judgeEdition', { params, body: judged });
    await referee.ask('judgeClaim', { params: { ...params, claim }, body: judged });
    const again = await referee.ask('judgeEdition', { params, body: { ...judged, word: 'stands' } });
    expect(again.changedAt).not.toBe(null);
    const items = async (edition: number) =>
      (await owner.ask('listVerdicts', { params: { notebook, edition } })).items.map((one) => [
        one.edition,
        one.claim,
        one.word,
      ]);
    expect(await items(1)).toEqual([
      [1, null, 'stands'],
      [1, claim, 'fails'],
    ]);
    await save(owner, notebook, 0, 'Once more.');
    await publish(notebook, 'Second');
    expect(await items(2)).toEqual([]);
    const all = await owner.ask('listAllVerdicts', { params: { notebook } });
    expect(all.items.map(({ edition }) => edition)).toEqual([1, 1]);
    expect(await owner.refused('judgeEdition', { params, body: judged })).toMatchObject({ status: 403 });
  });

  it('when a referee has written in the notebook before, then they give no verdict', async () => {
    const notebook = await made();
    await owner.ask('addMember', { params: { notebook }, body: { handle: 'mitsuno', role: 'coauthor' } });
    await save(referee, notebook, 0, 'I wrote this.');
    await owner.ask('addMember', { params: { notebook }, body: { handle: 'mitsuno', role: 'referee' } });
    await publish(notebook);
    const params = { notebook, edition: 1 };
    expect(await referee.refused('judgeEdition', { params, body: judged })).toMatchObject({ status: 403 });
  });

  it('when a claim is run again with another size, then the edition and the notebook stay as they are', async () => {
    const degeneracy = 'audit degeneracy m on 2 x 2';
    const notebook = await made();
    await save(owner, notebook, 3, `${audit}\n${degeneracy}`);
    await publish(notebook);
    const params = { notebook, edition: 1 };
    const before = await owner.ask('getEdition', { params });
    const claim = before.claims.find((one) => one.audit === 'degeneracy');
    const asked = await referee.ask('rerunClaims', { params, body: { claim: claim?.id, couplings: { h: '2' } } });
    expect([asked.status, asked.claims]).toEqual(['computing', []]);
    const whole = await owner.ask('rerunClaims', { params, body: {} });
    await work();
    const { items } = await reader.ask('listReruns', { params });
    const varied = items.find(({ id }) => id === asked.id);
    expect(varied).toMatchObject({ status: 'done', problems: [] });
    expect(varied?.claims.map((one) => one.audit)).toEqual(['degeneracy']);
    expect(varied?.claims[0]?.figures.energy).not.toBe(claim?.figures.energy);
    expect(items.find(({ id }) => id === whole.id)).toMatchObject({ claim: null, status: 'done', differences: [] });
    expect(await owner.ask('getEdition', { params })).toEqual(before);
    const wrong = await referee.refused('rerunClaims', { params, body: { claim: claim?.id, couplings: { q: '1' } } });
    expect(wrong).toMatchObject({ status: 400 });
    expect(await reader.refused('rerunClaims', { params, body: {} })).toMatchObject({ status: 403 });
  });
});
