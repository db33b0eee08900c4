import type { Health, KeptJob, KeptPerson, Limits, QueuedMail } from '../../shared/contracts/steward.ts';
import { tell } from '../db/announce.ts';
import type { Page, PageAsked } from '../db/page.ts';
import { readLimits, writeLimits } from '../db/queries/limits.ts';
import { listMails, reopenMail } from '../db/queries/mails.ts';
import { endSessions } from '../db/queries/sessions.ts';
import * as queries from '../db/queries/stewards.ts';
import { notFound, Refusal } from '../db/refusal.ts';
import type { Standing } from '../db/standing.ts';
import { engineVersion } from '../evaluation/version.ts';
import { type Context, type House, personOf } from './context.ts';

export function keptPeople(
  { database }: Context,
  search: PageAsked & { readonly q: string },
): Promise<Page<KeptPerson>> {
  return queries.listKeptPeople(database, search);
}

/** Makes someone a steward or not, closes an account or opens it. Stewards do neither to themselves, so that one is left. */
export function changeKeptPerson(
  { database }: Context,
  standing: Standing,
  person: string,
  change: { readonly steward?: boolean | undefined; readonly suspended?: boolean | undefined },
): Promise<KeptPerson> {
  return database.transaction(async (tx) => {
    if ((await queries.findKeptPerson(tx, person)) === null) throw notFound();
    if (person === personOf(standing) && (change.steward === false || change.suspended === true)) {
      throw new Refusal('conflict', 'Another steward has to do this for you.');
    }
    await queries.updateKeptPerson(tx, person, change);
    if (change.suspended === true) await endSessions(tx, person);
    await tell(tx, person, 'account', {});
    const kept = await queries.findKeptPerson(tx, person);
    if (kept === null) throw notFound();
    return kept;
  });
}

export function keptJobs(
  { database }: Context,
  page: PageAsked & { readonly status?: KeptJob['status'] | undefined },
): Promise<Page<KeptJob>> {
  return queries.listKeptJobs(database, page);
}

export function mailQueue(
  { database }: Context,
  page: PageAsked & { readonly state?: QueuedMail['state'] | undefined },
): Promise<Page<QueuedMail>> {
  return listMails(database, page);
}

export async function retryMail({ database }: Context, mail: string): Promise<QueuedMail> {
  const queued = await reopenMail(database, mail);
  if (queued === null)
    throw new Refusal('conflict', 'Only a mail that was given up, and is still known, is tried again.');
  return queued;
}

export function limitsOf({ database }: Context): Promise<Limits> {
  return readLimits(database);
}

export async function setLimits({ database }: Context, limits: Limits): Promise<Limits> {
  await writeLimits(database, limits);
  return readLimits(database);
}

/** Claims that wait longer than this have no worker. */
const longWaitSeconds = 600;

export async function healthOf({ database }: Context, house: House): Promise<Health> {
  const { mail, ...counts } = await queries.countAll(database);
  const { oldestWaitSeconds: wait, failed } = counts.editions;
  const worries = [
    ...(wait !== null && wait > longWaitSeconds
      ? [`Claims have waited for ${String(Math.round(wait / 60))} minutes: is a worker running?`]
      : []),
    ...(failed > 0 ? [`The claims of ${String(failed)} editions could not be computed.`] : []),
    ...(mail.failed > 0 ? [`${String(mail.failed)} mails could not be sent.`] : []),
    ...(house.mail === 'none' ? ['No SMTP server is set: nobody gets mail.'] : []),
    ...(house.mail === 'stand-in' ? ['A stand-in takes all mail: nobody gets any.'] : []),
  ];
  return {
    engine: engineVersion,
    node: process.version,
    upSeconds: Math.round(process.uptime()),
    memoryMb: Math.round(process.memoryUsage.rss() / 1_048_576),
    ...counts,
    mail: { road: house.mail, ...mail },
    worries,
  };
}
