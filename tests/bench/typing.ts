import { createServer } from 'node:http';
import { readFile } from 'node:fs/promises';
import type { AddressInfo } from 'node:net';
import { extname, join } from 'node:path';
import { root } from '../../server/commands/root.mjs';
import { launchBrowser } from '../browser/support/browser.ts';

/**
 * How long a theorist waits for the page after a key: from the key's event to the frame in which the answer to that very
 * text is painted, in Chromium on the built client (`npm run build` first), for a source of 60 lines.
 * Goal: 100 ms at the 95th percentile on two cores.
 */

const head = `lattice square torus 4 x 4
spins s on vertices
spins g on links
couplings J = 1, h = 0.6, K = 0.2

symmetry flip = prod(v: vertices) s^x[v]
symmetry w1 = prod(l: loop(1)) g^z[l]
symmetry w2 = prod(l: loop(2)) g^z[l]
law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]

map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l]                   for l: links
  s^x[v]            => prod(l: star(v)) g^x[l]  for v: vertices
`;

const models = Array.from(
  { length: 7 },
  (_, k) => `
model ising${String(k)} =
  - J sum(l: links) s^z[l.a] s^z[l.b]
  - h sum(v: vertices) s^x[v]
  - ${String(k + 1)} K sum(v: vertices) s^z[v] s^z[v + (${String(k + 1)}, 0)]
model gauge${String(k)} = bonds(ising${String(k)})
audit commute gauge${String(k)} with flat
`,
).join('');

const tail = `audit map bonds
audit spectrum ising0 [flip = +1] ~ gauge0 [flat = +1, w1 = +1, w2 = +1] on 2 x 2 levels 4
`;

const source = `${head}${models}${tail}`;
const types: Readonly<Record<string, string>> = {
  '.js': 'text/javascript',
  '.css': 'text/css',
  '.html': 'text/html',
  '.wasm': 'application/wasm',
};

/** The built client, and answers enough for one notebook whose saves all succeed. */
async function serve(): Promise<{ readonly url: string; readonly close: () => void }> {
  const id = '3f6b7a52-8c1d-4a8e-9d52-0a1f7c9b6e10';
  const person = { id, handle: 'typist', name: 'Typist' };
  const now = new Date().toISOString();
  const entries = source.split(/\n(?=model ising|audit map|symmetry flip)/).map((text, k) => ({
    id: `${id.slice(0, -2)}${String(k + 10)}`,
    kind: 'statements',
    text,
    version: 1,
    hold: null,
    changedBy: null,
    changedAt: now,
  }));
  const notebook = {
    ...{ id, title: 'Sixty lines', authors: [], visibility: 'private', owner: person, role: 'owner', edition: null },
    ...{ changedAt: now, createdAt: now, origin: null, links: 0, entries, may: ['read', 'edit'] },
  };
  const server = createServer((request, response) => {
    const path = new URL(request.url ?? '/', 'http://localhost').pathname;
    const json = (value: unknown) => response.setHeader('content-type', 'application/json').end(JSON.stringify(value));
    if (path === '/api/me') json({ person: { ...person, email: null, steward: false }, may: ['keep'] });
    else if (path.endsWith('/live')) response.setHeader('content-type', 'text/event-stream').write(': open\n\n');
    else if (path.endsWith('/hold')) json({ by: person, until: now });
    else if (path.endsWith('/editions')) json({ items: [], next: null });
    else if (path.includes('/entries/')) {
      const entry = entries.find((one) => path.endsWith(one.id));
      let body = '';
      request.on('data', (piece: Buffer) => (body += piece.toString()));
      request.on('end', () => {
        if (entry) Object.assign(entry, JSON.parse(body) as { text: string }, { version: entry.version + 1 });
        json(entry);
      });
    } else if (path.startsWith('/api/notebooks/')) json(notebook);
    else {
      const file = join(root, 'dist', 'client', extname(path) === '' ? 'index.html' : path);
      readFile(file).then(
        (bytes) => response.setHeader('content-type', types[extname(file)] ?? 'application/octet-stream').end(bytes),
        () => response.writeHead(404).end(),
      );
    }
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const url = `http://127.0.0.1:${String((server.address() as AddressInfo).port)}/notebooks/${id}`;
  return {
    url,
    close: () => {
      server.close();
      server.closeAllConnections();
    },
  };
}

/** Runs in the page; as text, because helpers that a loader adds to functions are not there. */
const watchKeys = `
  globalThis.times = [];
  addEventListener('keydown', () => {
    const { dataset } = document.querySelector('.spread');
    const before = Number(dataset.asked);
    const start = performance.now();
    const look = () => {
      const asked = Number(dataset.asked);
      // The frame after this one shows what stands in the document now.
      if (asked > before && Number(dataset.answered) >= asked)
        requestAnimationFrame(() => globalThis.times.push(performance.now() - start));
      else requestAnimationFrame(look);
    };
    requestAnimationFrame(look);
  }, true);
`;

export interface TypingFigures {
  readonly lines: number;
  readonly keys: number;
  /** Milliseconds. */
  readonly median: number;
  readonly p95: number;
  readonly worst: number;
}

/** Types in the middle of the notebook and measures each key as if it were the last. */
export async function measureTyping(keys = 80): Promise<TypingFigures> {
  const [browser, server] = await Promise.all([launchBrowser(), serve()]);
  try {
    const page = await (await browser.newContext({ viewport: { width: 1440, height: 1000 } })).newPage();
    await page.goto(server.url);
    await page.locator('[data-ref="gauge6/0"]').waitFor();
    await page.locator('[data-ref="ising0/1"]').click();
    await page.getByRole('textbox', { name: /^Source of entry/ }).waitFor();
    await page.evaluate(watchKeys);
    // Alternately a digit that changes the coefficient and its removal: each key changes the model and its image.
    for (let k = 0; k < keys; k += 1) {
      const done = await page.evaluate(() => (globalThis as unknown as { times: number[] }).times.length);
      await page.keyboard.press(k % 2 === 0 ? '2' : 'Backspace');
      await page.waitForFunction((n) => (globalThis as unknown as { times: number[] }).times.length > n, done);
      await page.waitForTimeout(k % 7 === 0 ? 400 : 40);
    }
    const times = await page.evaluate(() => (globalThis as unknown as { times: number[] }).times);
    const sorted = times.slice(4).sort((a, b) => a - b);
    const at = (share: number) => sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))] ?? NaN;
    return { lines: source.split('\n').length, keys: sorted.length, median: at(0.5), p95: at(0.95), worst: at(1) };
  } finally {
    await browser.close();
    server.close();
  }
}
