import fc from 'fast-check';
import { beforeAll, describe, expect, it } from 'vitest';
import { orcidSchema } from '../../shared/contracts/people.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

describe('an ORCID iD', () => {
  // The iDs of ORCID's own documentation, "Structure of the ORCID Identifier"; they end in each kind of check character.
  it.each(['0000-0002-1825-0097', '0000-0001-5109-3700', '0000-0002-1694-233X'])(
    'when it is %s, then it is taken',
    (id) => {
      expect(orcidSchema.parse(id)).toBe(id);
      expect(orcidSchema.parse(`https://orcid.org/${id.toLowerCase()}`)).toBe(id);
      expect(orcidSchema.parse(id.replaceAll('-', ''))).toBe(id);
    },
  );

  it('when one digit is mistyped, or two different neighbours change places, then it is refused', () => {
    const digits = fc.array(fc.integer({ min: 0, max: 9 }), { minLength: 15, maxLength: 15 });
    const good = (body: readonly number[]): string | undefined =>
      [...'0123456789X'].map((end) => body.join('') + end).find((text) => orcidSchema.safeParse(text).success);
    fc.assert(
      fc.property(digits, fc.nat(14), fc.integer({ min: 1, max: 9 }), (body, at, by) => {
        const id = good(body);
        if (id === undefined) return false;
        const wrong = [...id];
        wrong[at] = String((Number(wrong[at]) + by) % 10);
        const swapped = [...id];
        if (at < 14) [swapped[at], swapped[at + 1]] = [swapped[at + 1] ?? '', swapped[at] ?? ''];
        const other = swapped.join('');
        return (
          !orcidSchema.safeParse(wrong.join('')).success && (other === id || !orcidSchema.safeParse(other).success)
        );
      }),
      { seed: 20260, numRuns: 200 },
    );
  });

  it.each(['', '0000-0002-1825-0098', '0000-0002-1825', 'X000-0002-1825-0097', 'orcid'])(
    'when it is %j, then it is refused',
    (id) => {
      expect(orcidSchema.safeParse(id).success).toBe(false);
    },
  );
});

describe('an account', () => {
  let here: Server, owner: Client, coauthor: Client, reader: Client;
  beforeAll(async () => {
    here = await server({ FAKES: 'github,mail' });
    [owner, coauthor, reader] = [
      await person(here, 'rokafor'),
      await person(here, 'lbrandt'),
      await person(here, 'dquell'),
    ];
  });

  it('when the profile is changed, then it is kept, and what does not fit is refused', async () => {
    const body = { name: 'Ruth Okafor', affiliation: 'Marrowfield', orcid: '0000-0002-1825-0097', handle: 'ruth' };
    expect(await owner.ask('changeAccount', { body })).toMatchObject(body);
    expect(await owner.ask('changeAccount', { body: { affiliation: null } })).toMatchObject({
      affiliation: null,
      name: 'Ruth Okafor',
    });
    expect(await coauthor.refused('changeAccount', { body: { handle: 'RUTH' } })).toMatchObject({ status: 409 });
    expect(await owner.refused('changeAccount', { body: { handle: '-x' } })).toMatchObject({ status: 400 });
    expect(await owner.refused('changeAccount', { body: { email: 'not@mine.example' } })).toMatchObject({
      status: 409,
    });
    expect(await owner.refused('changeAccount', { body: { orcid: '0000-0002-1825-0098' } })).toMatchObject({
      status: 400,
    });
  });

  it('when all other sessions are ended, then only the asking one is left', async () => {
    const other = await person(here, 'rokafor');
    await owner.ask('endOtherSessions');
    expect((await other.ask('getMe')).person).toBeNull();
    expect((await owner.ask('listSessions')).items).toHaveLength(1);
  });

  it('when it is exported, then profile and notebooks are in it, and no secret', async () => {
    await owner.ask('createNotebook', {
      body: { title: 'In the export', entries: [{ kind: 'prose', text: 'Word for word.' }] },
    });
    const { secret } = await owner.ask('createToken', { body: { name: 'x', scopes: ['read'] } });
    const all = JSON.stringify(await owner.ask('exportAccount'));
    for (const part of ['"handle":"ruth"', 'In the export', 'Word for word.', 'r.okafor@marrowfield.example']) {
      expect(all).toContain(part);
    }
    expect(all).not.toContain(secret);
  });

  it('when it is deleted, then what is shared has to be handed on first, what is not goes, and editions stay signed', async () => {
    const shared = await coauthor.ask('createNotebook', {
      body: { title: 'Shared', entries: [{ kind: 'prose', text: 'x' }] },
    });
    const alone = await coauthor.ask('createNotebook', { body: { title: 'Alone' } });
    const params = { notebook: shared.id };
    await coauthor.ask('publishEdition', { params, body: { summary: 'First' } });
    const { person: next } = await coauthor.ask('addMember', { params, body: { handle: 'dquell', role: 'coauthor' } });
    expect(await coauthor.ask('getDeletion')).toMatchObject({
      goes: [{ title: 'Alone' }],
      handOn: [{ title: 'Shared', people: 1 }],
    });
    expect(await coauthor.refused('deleteAccount', { body: { handle: 'lbrandt' } })).toMatchObject({ status: 409 });
    await coauthor.ask('transferNotebook', { params, body: { person: next.id } });
    expect(await coauthor.refused('deleteAccount', { body: { handle: 'someone' } })).toMatchObject({ status: 400 });
    const token = await coauthor.ask('createToken', { body: { name: 'x', scopes: ['read'] } });
    await coauthor.ask('deleteAccount', { body: { handle: 'LBrandt' } });

    expect((await coauthor.ask('getMe')).person).toBeNull();
    const script = await visitor(here).fetch('/api/shelf', { headers: { Authorization: `Bearer ${token.secret}` } });
    expect(script.status).toBe(401);
    expect((await reader.ask('getEdition', { params: { ...params, edition: 1 } })).publishedBy?.name).toBe('L. Brandt');
    expect((await reader.ask('listMembers', { params })).items.map((member) => member.person.handle)).toEqual([
      'dquell',
    ]);
    const { rows } = await here.database.pool.query('select 1 from notebooks where id = $1', [alone.id]);
    expect(rows).toEqual([]);
    const left = await here.database.pool.query<{ row: string }>(
      `select people::text as row from people where name = 'L. Brandt'`,
    );
    expect(left.rows[0]?.row).not.toContain('marrowfield');
    // The same GitHub account is a new person from now on.
    const again = await person(here, 'lbrandt');
    expect((await again.ask('listShelf')).items).toEqual([]);
  });
});
