import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type RunningServer, startServer } from '../support/server.ts';
import { accessibility } from './support/accessible.ts';
import { launchBrowser, visit } from './support/browser.ts';

/** The first minutes: the catalogue, the guide, a text to begin with. */

let browser: Browser;
let server: RunningServer;
beforeAll(async () => {
  [browser, server] = await Promise.all([launchBrowser(), startServer()]);
});
afterAll(async () => {
  await browser?.close();
  await server?.stop();
});

async function signIn(page: Page, back: string): Promise<void> {
  await page.goto(`/sign-in?back=${encodeURIComponent(back)}`);
  await page.getByRole('link', { name: 'Sign in with GitHub' }).click();
  await page.getByRole('link', { name: 'R. Okafor' }).click();
}

describe('the catalogue', () => {
  it('when a visitor picks by what they have in hand, then they read the derivation with its claims', async () => {
    const { page, complaints, close } = await visit(browser, server.url);
    await page.goto('/catalogue');
    await page.getByText('12 worked dualities').waitFor();
    expect(await accessibility(page)).toEqual([]);
    await page.getByLabel('What you have in hand').selectOption('two spectra that differ');
    await page.getByText('1 of 12').waitFor();
    await page.getByRole('link', { name: 'A famous mistake: periodic compared with periodic' }).click();
    await page.getByRole('heading', { level: 1, name: 'A famous mistake' }).waitFor();
    await page.getByText('the levels of ising and dual differ on 6').first().waitFor();
    expect(await accessibility(page)).toEqual([]);
    expect(await page.getByRole('link', { name: 'doi:10.1103/PhysRev.60.252' }).count()).toBe(1);
    expect(complaints).toEqual([]);
    await close();
  });

  it('when Enter is pressed on a copy, then a notebook of that name is open', async () => {
    const { page, complaints, close } = await visit(browser, server.url);
    await signIn(page, '/catalogue');
    await page.getByRole('button', { name: 'copy “The Ising ring and its dual, sector by sector”' }).press('Enter');
    await page.waitForURL(/\/notebooks\//);
    await page.getByRole('heading', { level: 1, name: 'The Ising ring and its dual, sector by sector' }).waitFor();
    expect(complaints).toEqual([]);
    await close();
  });
});

describe('the shelf and the guide', () => {
  it('when somebody says what they want to do, then they have a notebook with a graded dual', async () => {
    const { page, complaints, close } = await visit(browser, server.url);
    await signIn(page, '/shelf');
    await page.getByRole('button', { name: 'gauge a symmetry' }).click();
    await page.waitForURL(/\/notebooks\//);
    await page.getByText('every term of gauged commutes with minimal.gauss').first().waitFor();
    expect(complaints).toEqual([]);
    await close();
  });

  it('leads from chapter to chapter, on a phone too', async () => {
    const { page, complaints, close } = await visit(browser, server.url, { viewport: { width: 390, height: 844 } });
    await page.goto('/guide');
    await page.getByRole('navigation', { name: 'Chapters' }).getByRole('link', { name: 'State a model' }).click();
    await page.getByRole('heading', { level: 1, name: 'State a model' }).waitFor();
    expect(await accessibility(page)).toEqual([]);
    const wide = () => page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);
    expect(await wide()).toBeLessThanOrEqual(0);
    for (const next of ['Say what it obeys', 'Choose a map', 'Ask whether it holds', 'What the grades mean']) {
      await page.getByText('Next:').getByRole('link', { name: next }).click();
      await page.getByRole('heading', { level: 1, name: next }).waitFor();
      expect(await wide()).toBeLessThanOrEqual(0);
    }
    expect(complaints).toEqual([]);
    await close();
  });
});
