import { beforeAll, describe, expect, it } from 'vitest';
import { type Client, person, type Server, server, visitor } from './support/client.ts';
import { byMail, mailbox, mailTo, tokenIn } from './support/mail.ts';

let here: Server, owner: Client, notebook: string;
beforeAll(async () => {
  here = await server({ FAKES: 'github,mail', SIGN_INS_PER_MINUTE: '500' });
  owner = await person(here, 'rokafor');
  notebook = (await owner.ask('createNotebook', { body: { title: 'Bonds' } })).id;
});

const roles = async (): Promise<[string, string][]> =>
  (await owner.ask('listMembers', { params: { notebook } })).items.map(({ person: { name }, role }) => [name, role]);
const invite = (email: string, role: 'referee' | 'reader' | 'coauthor' = 'referee') =>
  owner.ask('invite', { params: { notebook }, body: { email, role } });

describe('an invitation by mail', () => {
  it('when it is accepted by its link, then a new person is signed in, has the role, and who invited is told', async () => {
    await invite('ref@away.example');
    const mail = await mailTo(here, 'ref@away.example');
    expect(mail.subject).toBe('R. Okafor invites you to “Bonds”');
    const token = tokenIn(mail);
    const client = visitor(here);
    expect(await client.ask('lookAtInvitation', { body: { token } })).toMatchObject({
      notebook: { title: 'Bonds' },
      role: 'referee',
      by: { handle: 'rokafor' },
    });
    expect(await client.refused('useLink', { body: { token } })).toMatchObject({ status: 409, nameNeeded: true });
    expect(await client.ask('useLink', { body: { token, name: 'A. Referee' } })).toEqual({
      to: `/notebooks/${notebook}`,
    });
    expect((await client.ask('getNotebook', { params: { notebook } })).role).toBe('referee');
    expect(await roles()).toContainEqual(['A. Referee', 'referee']);
    const { items } = await owner.ask('listNotices');
    expect(items[0]).toMatchObject({
      kind: 'invitation',
      text: 'A. Referee accepted your invitation to “Bonds”, as referee.',
    });
    expect(await visitor(here).refused('useLink', { body: { token, name: 'Again' } })).toMatchObject({ status: 404 });
    expect((await owner.ask('listInvitations', { params: { notebook } })).items).toEqual([]);
  });

  it('when it is withdrawn, then its mail opens nothing', async () => {
    const { id } = await invite('late@away.example');
    const token = tokenIn(await mailTo(here, 'late@away.example'));
    expect((await owner.ask('listInvitations', { params: { notebook } })).items.map(({ email }) => email)).toEqual([
      'late@away.example',
    ]);
    await owner.ask('withdrawInvitation', { params: { notebook, invitation: id } });
    expect(await visitor(here).refused('lookAtInvitation', { body: { token } })).toMatchObject({ status: 404 });
    expect(await visitor(here).refused('useLink', { body: { token, name: 'Late' } })).toMatchObject({ status: 404 });
  });

  it('when an address is invited again, then the newer mail counts and the older one does not', async () => {
    await invite('twice@away.example', 'reader');
    const older = tokenIn(await mailTo(here, 'twice@away.example'));
    await invite('twice@away.example', 'coauthor');
    const newer = tokenIn(await mailTo(here, 'twice@away.example', 2));
    expect(await visitor(here).refused('lookAtInvitation', { body: { token: older } })).toMatchObject({ status: 404 });
    expect(await visitor(here).ask('lookAtInvitation', { body: { token: newer } })).toMatchObject({ role: 'coauthor' });
  });

  it('when someone known is invited, then they find it, also without the mail, and may accept under another account or decline', async () => {
    const known = await byMail(here, 'known@away.example', 'K. Nown');
    await invite('known@away.example', 'reader');
    const { items } = await known.ask('listInvited');
    expect(items).toMatchObject([{ role: 'reader', notebook: { title: 'Bonds' } }]);
    expect((await known.ask('listNotices')).items[0]).toMatchObject({ kind: 'invitation', to: '/shelf' });
    const invitation = items[0]?.id ?? '';
    const stranger = await person(here, 'dquell');
    expect(await stranger.refused('acceptInvitation', { body: { invitation } })).toMatchObject({ status: 404 });
    await known.ask('declineInvitation', { body: { invitation } });
    expect(await known.refused('acceptInvitation', { body: { invitation } })).toMatchObject({ status: 404 });
    expect((await owner.ask('listNotices')).items[0]?.text).toBe('K. Nown declined your invitation to “Bonds”.');

    await invite('known@away.example', 'reader');
    const token = tokenIn(
      await mailTo(here, 'known@away.example', (await mailbox(here, 'known@away.example')).length + 1),
    );
    expect(await stranger.ask('acceptInvitation', { body: { token } })).toEqual({ notebook });
    expect(await roles()).toContainEqual(['D. Quell', 'reader']);
  });

  it('when an owner is invited to a lower role, then they stay the owner', async () => {
    await invite('r.okafor@marrowfield.example', 'reader');
    const [mine] = (await owner.ask('listInvited')).items;
    await owner.ask('acceptInvitation', { body: { invitation: mine?.id ?? '' } });
    expect(await roles()).toContainEqual(['R. Okafor', 'owner']);
  });

  it('when more are sent than a day allows, then it is refused, also after withdrawing', async () => {
    const other = await person(here, 'mitsuno');
    const { id } = await other.ask('createNotebook', { body: { title: 'Many' } });
    await here.database.pool.query(`insert into limits values ('invitationsPerDay', 2)`);
    const params = { notebook: id };
    for (const email of ['m1@away.example', 'm2@away.example']) {
      const { id: invitation } = await other.ask('invite', { params, body: { email, role: 'reader' } });
      await other.ask('withdrawInvitation', { params: { ...params, invitation } });
    }
    const problem = await other.refused('invite', { params, body: { email: 'm3@away.example', role: 'reader' } });
    expect(problem).toMatchObject({ status: 429 });
    await here.database.pool.query('delete from limits');
  });
});

describe('ownership', () => {
  it('when it is handed on, then there is one owner, who was it is coauthor, and only a member can become it', async () => {
    const first = await person(here, 'lbrandt');
    const second = await person(here, 'tvasara');
    const { id } = await first.ask('createNotebook', { body: { title: 'Handed on' } });
    const params = { notebook: id };
    const next = (await second.ask('getMe')).person?.id ?? '';
    expect(await first.refused('transferNotebook', { params, body: { person: next } })).toMatchObject({ status: 409 });
    await first.ask('addMember', { params, body: { handle: 'tvasara', role: 'referee' } });
    const { items } = await first.ask('transferNotebook', { params, body: { person: next } });
    expect(items.map(({ person: { handle }, role }) => [handle, role])).toEqual([
      ['tvasara', 'owner'],
      ['lbrandt', 'coauthor'],
    ]);
    expect(await first.refused('deleteNotebook', { params })).toMatchObject({ status: 403 });
    expect((await second.ask('listNotices')).items[0]?.text).toBe('L. Brandt made you the owner of “Handed on”.');
    await second.ask('deleteNotebook', { params });
  });
});
