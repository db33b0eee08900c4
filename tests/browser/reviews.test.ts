import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { type RunningServer, startServer } from '../support/server.ts';
import { accessibility } from './support/accessible.ts';
import { launchBrowser, visit } from './support/browser.ts';
import { ask, notebookOf, publish, signIn } from './support/people.ts';

/** What coauthors and referees do with a derivation, from its first edition to the next. */

let browser: Browser;
let server: RunningServer;
beforeAll(async () => {
  [browser, server] = await Promise.all([launchBrowser(), startServer({ worker: true })]);
});
afterAll(async () => {
  await browser?.close();
  await server?.stop();
});

const setting = 'lattice chain torus 8\nspins s on vertices';
const model = (sign: string) =>
  `model field = - sum(v: vertices) s^x[v]${sign === '-' ? '' : ' - sum(l: links) s^z[l.a]'}\nlaw even(v: vertices) = s^x[v]`;
const audit = 'audit commute field with even';

it('a fork changes a term, a claim turns refuted; its variants are sent, and the owner leaves one with a reason', async () => {
  const owner = await visit(browser, server.url);
  const other = await visit(browser, server.url);
  await signIn(owner.page, 'R. Okafor');
  await signIn(other.page, 'L. Brandt');
  const notebook = await notebookOf(owner.page, 'A field on a chain', [setting, model('-'), audit]);
  await ask(owner.page, 'POST', `/api/notebooks/${notebook}/people`, { handle: 'lbrandt', role: 'coauthor' });
  await publish(owner.page, notebook, 'A field');

  await other.page.goto(`/notebooks/${notebook}/editions/1`);
  await other.page.getByRole('button', { name: 'fork this edition' }).click();
  await other.page.getByText('fork of', { exact: false }).waitFor();
  await other.page.waitForURL((url) => !url.pathname.includes(notebook));
  const fork = other.page.url().split('/').at(-1) ?? '';
  const { answer } = await ask(other.page, 'GET', `/api/notebooks/${fork}`);
  const entry = (answer as { entries: { id: string; version: number }[] }).entries[1];
  await other.page.evaluate(
    async ([where, text, version]) => {
      const headers = { 'content-type': 'application/json', 'x-gaugewright': '1', 'if-match': `"${version}"` };
      await fetch(where, { method: 'PUT', headers, body: JSON.stringify({ text }) });
    },
    [`/api/notebooks/${fork}/entries/${entry?.id ?? ''}`, model('+'), String(entry?.version ?? 1)] as const,
  );
  await other.page.goto(`/notebooks/${fork}`);
  await other.page.locator('[data-grade=refuted]').first().waitFor();

  await other.page.getByRole('link', { name: 'collate with its origin' }).click();
  const variant = other.page.getByRole('article', { name: 'Variant 1' });
  await variant.locator('[data-grade=refuted]').waitFor({ timeout: 60_000 });
  expect(await accessibility(other.page)).toEqual([]);
  await other.page
    .getByLabel('Letter to the writers', { exact: false })
    .fill('A field along $z$ belongs to the model.');
  await other.page.getByRole('button', { name: 'send one variant' }).click();
  await other.page.getByRole('heading', { name: 'Variants sent from this fork' }).waitFor();

  await owner.page.goto(`/notebooks/${notebook}/variants`);
  await owner.page.getByRole('link', { name: /A field along/ }).click();
  const received = owner.page.getByRole('article', { name: 'Variant 1' });
  await received.locator('[data-grade=refuted]').waitFor({ timeout: 60_000 });
  expect(await accessibility(owner.page)).toEqual([]);
  await owner.page.getByLabel('Reason, variant 1').fill('It breaks the law, as the claim says.');
  await owner.page.getByRole('button', { name: 'leave variant 1' }).click();
  await received.getByText('It breaks the law, as the claim says.').waitFor();

  // The sender's page says so without a reload.
  await other.page.getByText('It breaks the law, as the claim says.').waitFor();
  expect([...owner.complaints, ...other.complaints]).toEqual([]);
  await owner.close();
  await other.close();
});

it('a referee asks in the margin, runs a claim again, gives a verdict, and it stays with its edition', async () => {
  const owner = await visit(browser, server.url);
  const referee = await visit(browser, server.url);
  await signIn(owner.page, 'R. Okafor');
  await signIn(referee.page, 'M. Itsuno');
  const notebook = await notebookOf(owner.page, 'Under review', [setting, model('-'), audit]);
  await ask(owner.page, 'POST', `/api/notebooks/${notebook}/people`, { handle: 'mitsuno', role: 'referee' });
  await publish(owner.page, notebook, 'For the referee');

  const { page } = referee;
  await page.goto(`/notebooks/${notebook}`);
  await page.locator('.term').first().waitFor();
  await page.getByRole('button', { name: 'remark on entry 2' }).click();
  await page.getByLabel('Your remark').fill('Is the sign of $s^x$ free here?');
  await page.getByRole('button', { name: 'put it in the margin' }).click();
  await page.getByRole('article', { name: /Remark by M\. Itsuno, open/ }).waitFor();
  expect(await accessibility(page)).toEqual([]);

  await owner.page.goto(`/notebooks/${notebook}`);
  await owner.page.getByRole('button', { name: /^reply/ }).click();
  await owner.page.getByLabel('Your reply').fill('It is: no law fixes it.');
  await owner.page.getByRole('button', { name: 'send the reply' }).click();
  await page.getByRole('button', { name: 'one reply' }).click();
  await page.getByText('It is: no law fixes it.').waitFor();
  await page.getByRole('button', { name: 'settle' }).click();
  await page.getByRole('article', { name: /Remark by M\. Itsuno/ }).waitFor({ state: 'detached' });
  await page.getByLabel('Margin', { exact: true }).selectOption('all');
  await page.getByRole('article', { name: /Remark by M\. Itsuno, settled/ }).waitFor();

  await page.goto(`/notebooks/${notebook}/editions/1/claims`);
  await page.getByRole('button', { name: /^run again.*claim 1$/ }).click();
  await page.locator('[data-rerun=done]').waitFor({ timeout: 60_000 });
  await page.getByRole('button', { name: 'give a verdict on edition 1' }).click();
  await page.getByRole('radio', { name: 'stands' }).check();
  await page.getByLabel('Reason').fill('Every term commutes, as the audit shows.');
  await page.getByRole('button', { name: 'give the verdict' }).click();
  await page.locator('[data-verdict=stands]').waitFor();
  expect(await accessibility(page)).toEqual([]);
  await page.setViewportSize({ width: 400, height: 800 });
  expect(await page.evaluate(() => document.documentElement.scrollWidth - innerWidth)).toBe(0);

  await ask(owner.page, 'POST', `/api/notebooks/${notebook}/entries`, { kind: 'prose', text: 'Revised.' });
  await publish(owner.page, notebook, 'After review');
  await owner.page
    .getByRole('list', { name: 'Verdicts' })
    .getByText('not said of this edition', { exact: false })
    .waitFor();
  await owner.page.goto(`/notebooks/${notebook}/compare?left=1&right=2`);
  await owner.page.getByText('As physics they are the same', { exact: false }).waitFor({ timeout: 60_000 });
  await owner.page.getByText('Revised.').waitFor();
  expect(await accessibility(owner.page)).toEqual([]);
  expect([...owner.complaints, ...referee.complaints]).toEqual([]);
  await owner.close();
  await referee.close();
});
