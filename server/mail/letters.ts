/** Stands in the text of a mail for the address of the installation, which only the process that sends knows. */
export const baseMark = '\u0001';

export interface Letter {
  readonly subject: string;
  readonly text: string;
}

const name = 'Gaugewright';

/** A subject is one line, and not a long one. */
const line = (text: string): string => {
  const one = text.replace(/[\p{Cc}\s]+/gu, ' ').trim();
  const characters = Array.from(one);
  return characters.length <= 120 ? one : `${characters.slice(0, 119).join('')}…`;
};

const paragraphs = (...parts: readonly string[]): string => `${parts.join('\n\n')}\n`;

/** The one-time link that signs in. */
export function signInLetter(token: string, minutes: number): Letter {
  return {
    subject: `Your link to sign in to ${name}`,
    text: paragraphs(
      `Someone, most likely you, asked to sign in to ${name} with this address. This link does it, once, within the next ${String(minutes)} minutes:`,
      `${baseMark}/sign-in/link#${token}`,
      'If it was not you, nothing needs to be done: without this mail nobody can sign in as you.',
    ),
  };
}

/** The link by which an address becomes a way in of a person who is signed in. */
export function addressLetter(token: string, minutes: number, handle: string): Letter {
  return {
    subject: `Add this address to your account at ${name}`,
    text: paragraphs(
      `The account @${line(handle)} at ${name} asks to be reached, and signed in to, by this address. If that is your account, this link confirms it within the next ${String(minutes)} minutes:`,
      `${baseMark}/account/address#${token}`,
      'If it is not, do nothing, and nothing happens.',
    ),
  };
}

/** An invitation to a notebook. */
export function invitationLetter(given: {
  readonly token: string;
  readonly by: string;
  readonly title: string;
  readonly role: string;
  readonly days: number;
}): Letter {
  return {
    subject: line(`${given.by} invites you to “${given.title}”`),
    text: paragraphs(
      `${line(given.by)} invites you to the notebook “${line(given.title)}” at ${name}, as ${given.role}.`,
      `To accept or decline, within the next ${String(given.days)} days:`,
      `${baseMark}/invitation#${given.token}`,
      'This link signs you in with this address; keep it to yourself. If you do not know the sender, do nothing.',
    ),
  };
}

export function noticeLetter(text: string, path: string): Letter {
  return { subject: line(text), text: paragraphs(text, `${baseMark}${path}`) };
}

/** The daily mail: one line for each notice, in the order in which they came. */
export function digestLetter(items: readonly { readonly text: string; readonly to: string }[]): Letter {
  const [first] = items;
  const subject =
    items.length === 1 && first !== undefined ? first.text : `${String(items.length)} notices from your notebooks`;
  return {
    subject: line(subject),
    text: paragraphs(...items.map(({ text, to }) => `${text}\n${baseMark}${to}`)),
  };
}
