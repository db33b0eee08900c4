import type { Database } from '../db/connection.ts';
import {
  forgetMails,
  giveUpLate,
  insertMail,
  markSent,
  markUnsent,
  takeDigest,
  takeMail,
} from '../db/queries/mails.ts';
import { baseMark, digestLetter } from '../mail/letters.ts';
import { type Road, Unsendable } from '../mail/road.ts';
import { stopToken } from '../mail/stops.ts';

/** How often the queue is looked at, and how often daily mails and old ones are. */
const lookMs = 300;
const roundMs = 60_000;
/** A sender that took a mail and died leaves it to others after this. */
const leaseSeconds = 90;
/** Hour of the day (UTC) at which daily mails go. */
const digestHour = 6;

export interface PostSettings {
  /** Address of the installation in links, without a slash at its end. */
  readonly base: string;
  readonly secret: string;
}

/** Where a click stops mail; under /auth, so that whatever stands in front of the server hands it on. */
export const stopPath = '/auth/stop-mail';

/** Sends what is in the queue, and the daily mails when it is time, until it is closed. Any number may run at once. */
export function openPost(
  database: Database,
  road: Road,
  settings: PostSettings,
  onTrouble: (error: unknown) => void,
): { readonly close: () => Promise<void> } {
  let closed = false;
  let working: Promise<void> = Promise.resolve();
  let busy = false;
  let lastRound = 0;
  const look = async (): Promise<void> => {
    if (Date.now() - lastRound > roundMs) {
      lastRound = Date.now();
      await writeDigests(database, new Date());
      await giveUpLate(database);
      await forgetMails(database);
    }
    while (!closed && (await sendNext(database, road, settings)));
  };
  const timer = setInterval(() => {
    if (busy || closed) return;
    busy = true;
    working = look()
      .catch(onTrouble)
      .finally(() => (busy = false));
  }, lookMs);
  timer.unref();
  return {
    close: async () => {
      closed = true;
      clearInterval(timer);
      await working;
      road.close();
    },
  };
}

/** Sends one mail that is due; false if there is none. */
export async function sendNext(database: Database, road: Road, { base, secret }: PostSettings): Promise<boolean> {
  const mail = await takeMail(database, leaseSeconds);
  if (mail === null) return false;
  const stopAt = mail.stops === null ? null : `${base}${stopPath}/${stopToken(secret, mail.stops)}`;
  const foot =
    stopAt === null
      ? ''
      : `\n-- \nNotices about your notebooks. How they come: ${base}/account\nNo more ${
          mail.stops?.notebook == null ? 'of this mail' : 'mail about this notebook'
        }: ${stopAt}\n`;
  const text = `${mail.text.replaceAll(baseMark, base)}${foot}`;
  try {
    await road.send({ to: mail.to, subject: mail.subject, text, stopAt });
  } catch (error) {
    const why = error instanceof Error ? error.message : String(error);
    await markUnsent(database, mail, why, error instanceof Unsendable);
    return true;
  }
  await markSent(database, mail.id);
  return true;
}

/** Puts the daily mails into the queue whose hour has come by `now`. */
export async function writeDigests(database: Database, now: Date): Promise<void> {
  const until = new Date(now);
  until.setUTCHours(digestHour, 0, 0, 0);
  if (until > now) until.setUTCDate(until.getUTCDate() - 1);
  for (let more = true; more;) {
    more = await database.transaction(async (tx) => {
      const digest = await takeDigest(tx, until);
      if (digest === null) return false;
      const { person, email, items } = digest;
      await insertMail(tx, { ...digestLetter(items), to: email, stops: { person, notebook: null } });
      return true;
    });
  }
}
