import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type RunningServer, startServer } from '../support/server.ts';
import { accessibility } from './support/accessible.ts';
import { launchBrowser, visit, type Visit } from './support/browser.ts';

/** A question that is too large for the page: handed to the server, watched, taken back, answered, and there for others. */

let browser: Browser;
let server: RunningServer;
let one: Visit, two: Visit;
beforeAll(async () => {
  [browser, server] = await Promise.all([launchBrowser(), startServer({ worker: true })]);
  [one, two] = await Promise.all([visit(browser, server.url), visit(browser, server.url)]);
});
afterAll(async () => {
  await one?.close();
  await two?.close();
  await browser?.close();
  await server?.stop();
});

const source = (step: string) => `lattice chain torus 6
spins s on vertices
couplings J = 1, h = 0.6
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
audit scan energy of ising over h = 0.1 .. 2 by ${step} on 10
`;

async function signIn(page: Page, name: string): Promise<void> {
  await page.goto('/sign-in');
  await page.getByRole('link', { name: 'Sign in with GitHub' }).click();
  await page.getByRole('link', { name }).click();
  await page.getByRole('heading', { name: 'Shelf', level: 1 }).waitFor();
}

/** Makes a notebook of a source and opens it. */
async function open(page: Page, title: string, text: string): Promise<void> {
  const id = await page.evaluate(
    async ([name = '', words = '']) => {
      const answer = await fetch('/api/imports', {
        method: 'POST',
        headers: { 'content-type': 'application/json', 'x-gaugewright': '1' },
        body: JSON.stringify({ title: name, source: words }),
      });
      return ((await answer.json()) as { id: string }).id;
    },
    [title, text],
  );
  await page.goto(`/notebooks/${id}`);
  await page.getByRole('heading', { name: title, level: 1 }).waitFor();
}

const grade = (page: Page, name: string) => page.locator(`[data-grade="${name}"]`);

describe('a question that is too large for the page', () => {
  it('stands open with its cost, and can be handed over and taken back', async () => {
    const { page } = one;
    await signIn(page, 'R. Okafor');
    await open(page, 'Many points', source('0.005'));
    await grade(page, 'open').waitFor();
    await page.getByRole('button', { name: /^hand to the server/ }).click();
    await page.locator('[data-job="working"]').getByText(/\d+ %/).waitFor();
    // The plate has tests of its own.
    expect((await accessibility(page)).filter((line) => !line.includes('.plate-'))).toEqual([]);
    await page.getByRole('button', { name: /^take back/ }).click();
    await page.getByRole('button', { name: /^hand to the server/ }).waitFor();
  });

  it('is answered on the page that waits for it, by itself', async () => {
    const { page } = one;
    await open(page, 'Some points', source('0.04'));
    await page.getByRole('button', { name: /^hand to the server/ }).click();
    await grade(page, 'numerical').waitFor({ timeout: 80_000 });
    expect(await page.getByRole('button', { name: /^hand to the server/ }).count()).toBe(0);
    expect(await page.locator('.claim-statement').first().textContent()).toContain('energy of ising over h');
  });

  it('is listed on the page of one’s jobs, with its end', async () => {
    const { page } = one;
    await page.getByRole('link', { name: 'Jobs' }).click();
    await page.getByRole('heading', { name: 'Jobs', level: 1 }).waitFor();
    const rows = page.getByRole('table', { name: 'Your jobs' }).getByRole('row');
    await rows.nth(2).waitFor();
    await rows.nth(1).getByText('answered').waitFor();
    expect(await rows.nth(1).textContent()).toContain('Some points');
    expect(await rows.nth(2).textContent()).toContain('taken back');
    expect(await accessibility(page)).toEqual([]);
  });

  it('is there at once for someone else who asks the same', async () => {
    const { page } = two;
    await signIn(page, 'L. Brandt');
    await open(page, 'Elsewhere', `# another hand\n\n${source('0.04')}`);
    await grade(page, 'numerical').waitFor();
    await page.goto('/jobs');
    await page.getByRole('heading', { name: 'Nothing was handed over' }).waitFor();
    expect(await accessibility(page)).toEqual([]);
    expect([...one.complaints, ...two.complaints]).toEqual([]);
  });
});
