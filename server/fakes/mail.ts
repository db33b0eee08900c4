import type { AddressInfo } from 'node:net';
import type { RequestHandler } from 'express';
import express, { type Router } from 'express';
import { simpleParser } from 'mailparser';
import { SMTPServer } from 'smtp-server';
import { escapeHtml, plainPage } from '../page.ts';

/** How many mails are kept; older ones are forgotten first. */
const most = 500;
const mostBytes = 1_000_000;

interface Caught {
  readonly number: number;
  readonly at: string;
  readonly from: string;
  readonly to: readonly string[];
  readonly subject: string;
  readonly text: string;
  readonly headers: Readonly<Record<string, string>>;
}

/** The stand-in for a mail server: takes every mail by SMTP on loopback, sends none on, and shows them on a page. */
export interface FakeMail {
  /** Where mail is sent to, smtp://127.0.0.1:port. */
  readonly url: string;
  /** The page that shows what was sent: anyone's mail to anyone. */
  readonly pages: Router;
  readonly close: () => Promise<void>;
}

export async function openFakeMail(nonceOf: (response: Parameters<RequestHandler>[1]) => string): Promise<FakeMail> {
  const caught: Caught[] = [];
  let number = 0;
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    size: mostBytes,
    logger: false,
    onData: (stream, { envelope }, done) => {
      simpleParser(stream).then(
        (mail) => {
          const plain = (name: string): [string, string][] => {
            const line = mail.headerLines.find(({ key }) => key === name);
            return line === undefined
              ? []
              : [
                  [
                    name,
                    line.line
                      .slice(name.length + 1)
                      .replace(/\r?\n\s/g, ' ')
                      .trim(),
                  ],
                ];
          };
          number += 1;
          caught.push({
            number,
            at: new Date().toISOString(),
            from: envelope.mailFrom === false ? '' : envelope.mailFrom.address,
            to: envelope.rcptTo.map(({ address }) => address),
            subject: mail.subject ?? '',
            text: mail.text ?? '',
            headers: Object.fromEntries(
              ['from', 'to', 'list-unsubscribe', 'list-unsubscribe-post', 'auto-submitted'].flatMap(plain),
            ),
          });
          caught.splice(0, Math.max(0, caught.length - most));
          done();
        },
        (error: unknown) => done(error instanceof Error ? error : new Error(String(error))),
      );
    },
  });
  // A connection that a sender drops is no trouble of ours.
  server.on('error', () => undefined);
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(0, '127.0.0.1', () => resolve());
  });
  const { port } = server.server.address() as AddressInfo;

  const pages = express.Router();
  const wanted = (to: unknown): Caught[] =>
    caught.filter((mail) => typeof to !== 'string' || to === '' || mail.to.includes(to)).reverse();
  pages.get('/messages.json', (request, response) => {
    response.set('Cache-Control', 'no-store').json({ items: wanted(request.query.to) });
  });
  pages.get('/', (request, response) => {
    response
      .set('Cache-Control', 'no-store')
      .type('html')
      .send(plainPage('Mail that was sent', nonceOf(response), list(wanted(request.query.to), caught)));
  });
  return {
    url: `smtp://127.0.0.1:${String(port)}`,
    pages,
    close: () => new Promise((resolve) => server.close(() => resolve())),
  };
}

function list(shown: readonly Caught[], all: readonly Caught[]): string {
  const addresses = [...new Set(all.flatMap((mail) => mail.to))].sort();
  const filter = addresses.map((to) => `<a href="?to=${encodeURIComponent(to)}">${escapeHtml(to)}</a>`);
  const intro = `<p>This installation has no mail server, so this page stands in for everyone’s mailbox. Nothing leaves it.</p>`;
  if (shown.length === 0) return `${intro}<p>No mail yet.</p>`;
  return `${intro}<p>To ${['<a href="?">everyone</a>', ...filter].join(', ')}</p>${shown.map(article).join('\n')}`;
}

const article = ({ subject, to, at, text }: Caught): string => `<article>
<h2>${escapeHtml(subject)}</h2>
<div>to ${escapeHtml(to.join(', '))}, <time datetime="${at}">${escapeHtml(at.replace('T', ' ').slice(0, 16))}</time></div>
<pre>${withLinks(text)}</pre>
</article>`;

/** Text as HTML in which addresses can be followed. */
function withLinks(text: string): string {
  return text
    .split(/(https?:\/\/[^\s<>"]+)/)
    .map((piece, index) =>
      index % 2 === 1 ? `<a href="${escapeHtml(piece)}">${escapeHtml(piece)}</a>` : escapeHtml(piece),
    )
    .join('');
}
