/**
 * Pictures of every page, in both themes and at four widths, to be looked at:
 *
 *   npm run pictures -- ADDRESS FOLDER
 *
 * ADDRESS is that of a running demonstration (`npm start`), where the stand-in for GitHub lets anyone sign in. Nothing of
 * it is kept in the repository; the picture of the README, `src/assets/spread.png`, was taken of `/try` with a term in hand.
 */
import { mkdir } from 'node:fs/promises';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { launchBrowser } from './support/browser.ts';

const [address = 'http://127.0.0.1:3000', folder = 'dist/pictures'] = process.argv.slice(2);
const widths = [390, 820, 1280, 1680] as const;
const person = 'R. Okafor';

/** Pages that need no sign-in come first; then those of the person who signs in. */
const open = { home: '/', 'sign-in': '/sign-in', catalogue: '/catalogue', guide: '/guide', missing: '/no/such/page' };
const own = { shelf: '/shelf', account: '/account', notices: '/notices', jobs: '/jobs' };

/** Waits until nothing is being computed or loaded that the page would still show. */
async function settled(page: Page): Promise<void> {
  await page.waitForLoadState('load');
  await page.evaluate(() => document.fonts.ready);
  await page.waitForTimeout(2500);
}

async function picture(page: Page, name: string): Promise<void> {
  for (const colorScheme of ['light', 'dark'] as const) {
    await page.emulateMedia({ colorScheme, reducedMotion: 'reduce' });
    for (const width of widths) {
      await page.setViewportSize({ width, height: width < 800 ? 844 : 900 });
      await page.waitForTimeout(300);
      await page.screenshot({ path: join(folder, `${name}-${colorScheme}-${String(width)}.png`) });
    }
  }
}

async function signIn(page: Page): Promise<void> {
  await page.goto('/sign-in');
  await page.getByRole('link', { name: /GitHub/ }).click();
  await page.getByRole('link', { name: person }).click();
  await page.waitForURL((url) => !url.pathname.includes('login'));
}

await mkdir(folder, { recursive: true });
const browser = await launchBrowser();
try {
  const context = await browser.newContext({ baseURL: address, viewport: { width: 1280, height: 900 } });
  const page = await context.newPage();
  const walk = async (pages: Readonly<Record<string, string>>): Promise<void> => {
    for (const [name, path] of Object.entries(pages)) {
      await page.goto(path);
      await settled(page);
      await picture(page, name);
      process.stdout.write(`${name}\n`);
    }
  };
  await walk(open);
  await signIn(page);
  await walk(own);
  await page.goto('/shelf');
  const notebooks = page.locator('a[href^="/notebooks/"]');
  await notebooks.first().waitFor();
  const paths = [...new Set(await notebooks.evaluateAll((links) => links.map((a) => a.getAttribute('href') ?? '')))];
  await walk(
    Object.fromEntries(paths.slice(0, 6).map((path, k) => [k === 0 ? 'spread' : `notebook-${String(k)}`, path])),
  );
} finally {
  await browser.close();
}
