import type { Bind } from '../middleware/endpoint.ts';
import * as accounts from '../services/accounts.ts';
import type { Context, House } from '../services/context.ts';
import * as invitations from '../services/invitations.ts';
import * as notices from '../services/notices.ts';
import { endOtherSessions, endSessionOf, me, sessionsOf } from '../services/people.ts';
import * as stewards from '../services/stewards.ts';

/** The rows about people, but those of the sign-in. */
export function peopleRoutes(bind: Bind, context: Context, house: House): void {
  bind('getMe', ({ standing }) => me(context, standing));
  bind('listSessions', ({ standing, request }) => sessionsOf(context, standing, request.sessionID));
  bind('endSession', ({ standing, params }) => endSessionOf(context, standing, params.session));
  bind('endOtherSessions', ({ standing, request }) => endOtherSessions(context, standing, request.sessionID));
  accountRoutes(bind, context, house);
  invitationRoutes(bind, context);
  noticeRoutes(bind, context);
  stewardRoutes(bind, context, house);
}

function accountRoutes(bind: Bind, context: Context, house: House): void {
  bind('getAccount', ({ standing }) => accounts.accountOf(context, standing));
  bind('changeAccount', ({ standing, body }) => accounts.changeAccount(context, standing, body));
  bind('addAddress', ({ standing, body }) => accounts.addAddress(context, house, standing, body.email));
  bind('confirmAddress', ({ standing, body }) => accounts.confirmAddress(context, standing, body.token));
  bind('removeWayIn', ({ standing, params }) => accounts.removeWayIn(context, standing, params.way));
  bind('exportAccount', ({ standing, request }) => accounts.exportAccount(context, standing, request.sessionID));
  bind('getDeletion', ({ standing }) => accounts.deletionOf(context, standing));
  bind('deleteAccount', ({ standing, body }) => accounts.deleteAccount(context, standing, body.handle));
  bind('listTokens', ({ standing }) => accounts.tokensOf(context, standing));
  bind('createToken', ({ standing, body }) => accounts.createToken(context, standing, body));
  bind('revokeToken', ({ standing, params }) => accounts.revokeToken(context, standing, params.key));
}

function invitationRoutes(bind: Bind, context: Context): void {
  bind('listInvitations', ({ standing }) => invitations.invitationsOf(context, standing));
  bind('invite', ({ standing, body }) => invitations.invite(context, standing, body.email, body.role));
  bind('withdrawInvitation', ({ standing, params }) =>
    invitations.withdrawInvitation(context, standing, params.invitation),
  );
  bind('listInvited', ({ standing }) => invitations.invitedOf(context, standing));
  bind('lookAtInvitation', ({ body }) => invitations.lookAtInvitation(context, body.token));
  bind('acceptInvitation', ({ standing, body }) => invitations.acceptInvitation(context, standing, body));
  bind('declineInvitation', ({ standing, body }) => invitations.declineInvitation(context, standing, body));
  bind('transferNotebook', ({ standing, body }) => invitations.transferNotebook(context, standing, body.person));
}

function noticeRoutes(bind: Bind, context: Context): void {
  bind('listNotices', ({ standing, query }) => notices.noticesOf(context, standing, query));
  bind('readNotices', ({ standing, body }) => notices.readNotices(context, standing, body.notices));
  bind('getNoticeSettings', ({ standing }) => notices.settingsOf(context, standing));
  bind('setNoticeMail', ({ standing, body }) => notices.setNoticeMail(context, standing, body.mail));
  bind('followNotebook', ({ standing, body }) => notices.followNotebook(context, standing, body.mail));
}

function stewardRoutes(bind: Bind, context: Context, house: House): void {
  bind('listKeptPeople', ({ query }) => stewards.keptPeople(context, query));
  bind('changeKeptPerson', ({ standing, params, body }) =>
    stewards.changeKeptPerson(context, standing, params.person, body),
  );
  bind('listKeptJobs', ({ query }) => stewards.keptJobs(context, query));
  bind('listMail', ({ query }) => stewards.mailQueue(context, query));
  bind('retryMail', ({ params }) => stewards.retryMail(context, params.mail));
  bind('getLimits', () => stewards.limitsOf(context));
  bind('setLimits', ({ body }) => stewards.setLimits(context, body));
  bind('getHealth', () => stewards.healthOf(context, house));
}
