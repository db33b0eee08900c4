import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type RunningServer, startServer } from '../support/server.ts';
import { launchBrowser, visit, type Visit } from './support/browser.ts';

/** The editor's help, by keyboard alone, on the example that every visitor finds open. */

let browser: Browser;
let server: RunningServer;
let one: Visit;
beforeAll(async () => {
  [browser, server] = await Promise.all([launchBrowser(), startServer()]);
  one = await visit(browser, server.url);
});
afterAll(async () => {
  await one?.close();
  await browser?.close();
  await server?.stop();
});

const text = async (page: Page): Promise<string> =>
  page.evaluate(() => [...document.querySelectorAll('.cm-line')].map((line) => line.textContent).join('\n'));

async function press(page: Page, key: string, times = 1): Promise<void> {
  for (let k = 0; k < times; k += 1) await page.keyboard.press(key);
}

/** Tab from the source to the act of this name, and Enter. */
async function actOn(page: Page, name: string): Promise<void> {
  const act = page.getByRole('button', { name, exact: true });
  await act.waitFor();
  for (let k = 0; k < 20; k += 1) {
    if (await act.evaluate((element) => element === document.activeElement)) return page.keyboard.press('Enter');
    await page.keyboard.press('Tab');
  }
  throw new Error(`${name} is not reached by Tab`);
}

const announced = (page: Page, words: string) =>
  page.locator('.cm-announced', { hasText: words }).waitFor({ state: 'attached' });

describe('the editor', () => {
  it('opens the source of a term, and says what a name is', async () => {
    const { page } = one;
    await page.goto('/try');
    await page.locator('[data-ref="gauge/0"]').waitFor();
    await page.locator('[data-ref="ising/0"]').focus();
    await page.keyboard.press('Enter');
    await page.getByRole('textbox', { name: /^Source of entry/ }).waitFor();
    await press(page, 'Control+Home');
    await press(page, 'ArrowRight', 7);
    await page.getByRole('note', { name: 'The name at the caret' }).getByText('ising: a model').waitFor();
    await page.keyboard.press("Control+'");
    await announced(page, 'ising: a model');
  });

  it('offers the cells that fit, and writes the one that is chosen', async () => {
    const { page } = one;
    const before = await text(page);
    await press(page, 'Control+End');
    await page.keyboard.type(' - J sum(u: vertices) s^z[');
    const list = page.getByRole('listbox');
    await list.getByRole('option').first().waitFor();
    await expect
      .poll(() => list.getByRole('option').allTextContents(), { timeout: 10_000 })
      .toEqual(['ua cell of vertices', 'verticesone cell by its unit cell']);
    // The list ignores keys in its first moments, so that what is typed on is not taken for a choice.
    await page.waitForTimeout(400);
    await press(page, 'ArrowDown');
    await page.waitForTimeout(200);
    await press(page, 'Enter');
    await page.keyboard.type(']');
    await expect.poll(() => text(page), { timeout: 10_000 }).toBe(`${before} - J sum(u: vertices) s^z[u]`);
    await page.locator('[data-ref="ising/2"]').waitFor();
    for (let k = 0; k < 40 && (await text(page)) !== before; k += 1) await press(page, 'Control+z');
    await expect.poll(() => text(page), { timeout: 10_000 }).toBe(before);
    await page.locator('[data-ref="ising/2"]').waitFor({ state: 'detached' });
  });

  it('goes to the declaration in another entry', async () => {
    const { page } = one;
    await press(page, 'Control+Home');
    await press(page, 'ArrowDown');
    await press(page, 'Home');
    await press(page, 'ArrowRight', 3);
    await page.getByRole('note', { name: 'The name at the caret' }).getByText('J: a coupling').waitFor();
    await actOn(page, 'where J is declared');
    await page.locator('.cm-line', { hasText: 'couplings J = 1' }).waitFor();
    await press(page, 'Escape');
    expect(await page.locator('.cm-content').count()).toBe(0);
  });

  it('renames everywhere, and tells how often', async () => {
    const { page } = one;
    await page.locator('[data-ref="ising/0"]').focus();
    await page.keyboard.press('Enter');
    await page.getByRole('textbox', { name: /^Source of entry/ }).waitFor();
    await press(page, 'Control+Home');
    await press(page, 'ArrowRight', 7);
    await actOn(page, 'rename ising');
    await page.keyboard.type('J');
    await press(page, 'Enter');
    await page.getByRole('alert').filter({ hasText: 'J' }).waitFor();
    await press(page, 'Control+a');
    await page.keyboard.type('magnet');
    await press(page, 'Enter');
    await announced(page, 'Renamed in');
    await page.locator('[data-ref="magnet/0"]').waitFor();
    await page.locator('[data-ref="gauge/0"]').waitFor();
    expect(await page.locator('.problem:not(.caution)').count()).toBe(0);
  });

  it('writes a fix where a problem names one', async () => {
    const { page } = one;
    await press(page, 'Control+End');
    await press(page, 'Enter');
    await page.keyboard.type('+ J sum(w: vertices) s^x[w] jj');
    await page.keyboard.press('Backspace');
    await page.keyboard.press('Backspace');
    await page.keyboard.type('sum(w: vertces) s^z[w]');
    await actOn(page, 'write “vertices”');
    await announced(page, 'vertices is written.');
    expect(await text(page)).toContain('sum(w: vertices) s^z[w]');
  });

  it('leaves no complaint', () => {
    expect(one.complaints).toEqual([]);
  });
});
