import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type RunningServer, startServer } from '../support/server.ts';
import { accessibility } from './support/accessible.ts';
import { launchBrowser, visit, type Visit } from './support/browser.ts';

/**
 * The whole main job in a browser: sign in, state a model and its map, read the dual and the grades from the page, publish
 * an edition, and read it again after the server was restarted. Expected outcome: F. Wegner, J. Math. Phys. 12, 2259 (1971).
 */

let browser: Browser;
let server: RunningServer;
beforeAll(async () => {
  [browser, server] = await Promise.all([launchBrowser(), startServer({ worker: true })]);
});
afterAll(async () => {
  await browser?.close();
  await server?.stop();
});

const source = `lattice square torus 4 x 4
spins s on vertices
spins g on links
couplings J = 1, h = 0.6

model ising =
- J sum(l: links) s^z[l.a] s^z[l.b]
- h sum(v: vertices) s^x[v]

symmetry flip = prod(v: vertices) s^x[v]
symmetry w1 = prod(l: loop(1)) g^z[l]
symmetry w2 = prod(l: loop(2)) g^z[l]
law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]

map bonds from s to g
s^z[l.a] s^z[l.b] => g^z[l] for l: links
s^x[v] => prod(l: star(v)) g^x[l] for v: vertices

model gauge = bonds(ising)

audit map bonds
audit commute gauge with flat
audit spectrum ising [flip = +1] ~ gauge [flat = +1, w1 = +1, w2 = +1] on 2 x 2, 3 x 3 levels 8`;

/** Types a source as a person would; lines that continue a statement are indented by hand. */
async function typeSource(page: Page, text: string): Promise<void> {
  const keyword = /^(lattice|spins|couplings|model|symmetry|law|map|audit|operator)\b/;
  let indent = '';
  for (const line of text.split('\n')) {
    const own = line === '' || keyword.test(line) ? '' : '  ';
    // The editor keeps the indentation of the line before; one Backspace takes it back.
    if (indent !== '' && own === '') await page.keyboard.press('Backspace');
    if (indent === '' && own !== '') await page.keyboard.type(own);
    await page.keyboard.type(line);
    await page.keyboard.press('Enter');
    indent = own;
  }
}

async function signIn(page: Page, name: string): Promise<void> {
  await page.goto('/sign-in');
  await page.getByRole('link', { name: 'Sign in with GitHub' }).click();
  await page.getByRole('link', { name }).click();
  await page.getByRole('heading', { name: 'Shelf', level: 1 }).waitFor();
}

async function newNotebook(page: Page, title: string): Promise<void> {
  await page.getByLabel('Title of a new notebook').fill(title);
  await page.getByRole('button', { name: 'begin it' }).click();
  await page.getByRole('heading', { name: title, level: 1 }).waitFor();
}

const saved = (page: Page) => page.locator('[data-saving="all saved"]').waitFor();

/** Terms of a page as they are spoken, in order. */
const spoken = (page: Page, side: 'left' | 'right') =>
  page
    .locator(`.pair [data-ref][data-term=${side}]`)
    .evaluateAll((all) => all.map((one) => one.getAttribute('aria-label')));

/** Saves another text of an entry on top of its newest version, from another window. */
const saveElsewhere = (page: Page, address: string, text: string) =>
  page.evaluate(
    async ([entry = '', words = '']) => {
      const notebook = await fetch(entry.replace(/\/entries.*/, ''));
      const { entries } = (await notebook.json()) as { entries: { id: string; version: number }[] };
      const version = entries.find(({ id }) => entry.endsWith(id))?.version ?? 0;
      await fetch(entry, {
        method: 'PUT',
        headers: { 'content-type': 'application/json', 'x-gaugewright': '1', 'if-match': `"${String(version)}"` },
        body: JSON.stringify({ text: words }),
      });
    },
    [address, text],
  );

const grades = (page: Page) =>
  page.locator('[data-grade]').evaluateAll((all) => all.map((one) => one.getAttribute('data-grade')));

describe('the main job', () => {
  let one: Visit;
  let editionAddress: string;
  beforeAll(async () => {
    one = await visit(browser, server.url);
  });
  afterAll(() => one?.close());

  it('signs in through the stand-in and finds an empty shelf that teaches', async () => {
    await signIn(one.page, 'R. Okafor');
    await one.page.getByRole('heading', { name: 'An empty shelf' }).waitFor();
    expect(await accessibility(one.page)).toEqual([]);
  });

  it('types the magnet and reads its dual, term against term, with the grades', async () => {
    const { page } = one;
    await newNotebook(page, 'A magnet on the square torus');
    await page.getByRole('button', { name: 'add statements at the end' }).click();
    await page.getByRole('textbox', { name: 'Source of entry 1' }).waitFor();
    await typeSource(page, source);
    await page.locator('[data-grade=numerical]').nth(1).waitFor();
    await page.keyboard.press('Escape');
    const left = await spoken(page, 'left');
    const right = await spoken(page, 'right');
    expect(left).toHaveLength(2);
    expect(right).toHaveLength(2);
    expect(right[0]).toMatch(/electric$/);
    expect(right[1]).toMatch(/star$/);
    const dual = await page.locator('[data-ref^="gauge/"] annotation').allTextContents();
    expect(dual[0]).toMatch(/-J\s*\\sum.*g\^\{?z\}?/);
    expect(dual[1]).toMatch(/-h\s*\\sum.*\\prod.*g\^\{?x\}?/);
    expect(new Set(await grades(page))).toEqual(new Set(['proved', 'exact', 'numerical']));
    await saved(page);
    expect(await accessibility(page)).toEqual([]);
  });

  it('shows on the plate where the term in hand acts, and says the same', async () => {
    const { page } = one;
    await page.locator('[data-ref="ising/1"]').focus();
    const plate = page.getByRole('complementary', { name: 'Plate' });
    await plate.getByRole('img', { name: /spin language: X of s at vertex \(0, 0\)$/ }).waitFor();
    const star = await plate.getByRole('img', { name: /gauge language/ }).getAttribute('aria-label');
    expect(star?.match(/X of g/g)).toHaveLength(4);
  });

  it('publishes an edition, whose claims the server computes and seals', async () => {
    const { page } = one;
    await page.getByRole('button', { name: 'publish edition 1' }).click();
    await page.getByLabel('What is new in it, in one line').fill('The magnet and its gauge theory');
    await page.getByRole('button', { name: 'publish it' }).click();
    await page.getByRole('status').getByRole('link', { name: 'Edition 1' }).click();
    await page.locator('[data-status=sealed]').waitFor({ timeout: 60_000 });
    editionAddress = page.url();
    expect(new Set(await grades(page))).toEqual(new Set(['proved', 'exact', 'numerical']));
    expect(await accessibility(page)).toEqual([]);
  });

  it('reads the same edition after the server was restarted', async () => {
    const { page } = one;
    const before = await page.locator('main').innerText();
    await page.goto('about:blank');
    await server.restart();
    await page.goto(editionAddress);
    await page.locator('[data-status=sealed]').waitFor();
    await page.locator('[data-grade]').first().waitFor();
    await page.locator('.plot').waitFor();
    await page.locator('.commutation-table').waitFor();
    expect(await page.locator('main').innerText()).toBe(before);
  });

  it('caused no error and no breach of the content security policy', () => {
    expect(one.complaints).toEqual([]);
  });
});

describe('writing', () => {
  let one: Visit;
  beforeAll(async () => {
    one = await visit(browser, server.url);
    await signIn(one.page, 'L. Brandt');
    await newNotebook(one.page, 'A chain');
    await one.page.getByRole('button', { name: 'add statements at the end' }).click();
    await one.page.getByRole('textbox', { name: 'Source of entry 1' }).waitFor();
    await typeSource(
      one.page,
      'lattice chain torus 8\nspins s on vertices\nmodel field = - sum(v: vertices) s^x[v] - sum(v: vertices) s^z[v]',
    );
    await one.page.locator('[data-ref="field/1"]').waitFor();
  });
  afterAll(() => one?.close());

  it('opens the source at the very term, keeps the last good page while it is broken, and says what is wrong', async () => {
    const { page } = one;
    await page.keyboard.press('Escape');
    const term = page.locator('[data-ref="field/1"]');
    const said = await term.getAttribute('aria-label');
    await term.click();
    await page.getByRole('textbox', { name: 'Source of entry 1' }).waitFor();
    await page.keyboard.type('(');
    await page.locator('.source-note').waitFor();
    expect(await page.locator('.stale [data-ref="field/1"]').getAttribute('aria-label')).toBe(said);
    await page.keyboard.press('Backspace');
    await page.locator('.source-note').waitFor({ state: 'detached' });
    expect(await page.locator('.stale').count()).toBe(0);
  });

  it('is set as type again when the caret leaves, by Escape, with the focus on the term', async () => {
    const { page } = one;
    await page.keyboard.press('Escape');
    expect(await page.getByRole('textbox', { name: 'Source of entry 1' }).count()).toBe(0);
    await page.waitForFunction(() => document.activeElement?.hasAttribute('data-ref') === true);
  });

  it('goes between terms by the arrow keys and into the source by Enter', async () => {
    const { page } = one;
    await page.locator('[data-ref="field/0"]').focus();
    await page.keyboard.press('ArrowDown');
    expect(await page.evaluate(() => document.activeElement?.getAttribute('data-ref'))).toBe('field/1');
    await page.keyboard.press('Enter');
    await page.getByRole('textbox', { name: 'Source of entry 1' }).waitFor();
    await page.keyboard.press('Escape');
  });

  it('adds, moves and deletes entries from the keyboard, and undoes a deletion', async () => {
    const { page } = one;
    await page.keyboard.press('Control+;');
    await page.getByRole('dialog').getByRole('combobox').fill('add prose');
    await page.keyboard.press('Enter');
    await page.getByRole('textbox', { name: 'Source of entry 2' }).waitFor();
    await page.keyboard.type('# A field\nIt points along $s^x$.');
    await page.getByRole('button', { name: 'move up' }).click();
    await page.getByRole('textbox', { name: 'Source of entry 1' }).waitFor();
    await page.getByRole('button', { name: 'delete', exact: true }).first().click();
    await page.getByText('Entry (1) is deleted.').waitFor();
    expect(await page.locator('.entry').count()).toBe(1);
    await page.getByRole('button', { name: 'undo' }).click();
    await page.getByRole('heading', { name: 'A field' }).waitFor();
    await saved(page);
  });

  it('keeps both texts when someone else saved meanwhile', async () => {
    const { page } = one;
    const other = await one.another();
    await other.goto(page.url());
    await other.locator('[data-ref="field/0"]').waitFor();
    // Two windows of one person: neither is kept out by a hold.
    await page.locator('[data-ref="field/0"]').click();
    await page.getByRole('textbox', { name: /Source of entry/ }).waitFor();
    await page.keyboard.press('Control+End');
    await page.keyboard.type('# from the first');
    const id = await page.locator('[data-writing]').getAttribute('data-entry');
    const address = new URL(`/api${new URL(page.url()).pathname}/entries/${id ?? ''}`, page.url()).href;
    let first = true;
    await page.route(address, async (route) => {
      // While this save is under way, the other window saves.
      if (first) await saveElsewhere(other, address, 'lattice chain torus 6');
      first = false;
      await route.continue();
    });
    const both = page.getByRole('alertdialog', { name: 'Two texts of this entry' });
    await both.waitFor();
    expect(await both.innerText()).toContain('# from the first');
    expect(await both.innerText()).toContain('lattice chain torus 6');
    await both.getByRole('button', { name: 'save yours over it' }).click();
    await saved(page);
    await other.close();
    await page.reload();
    await page.locator('[data-ref="field/0"]').waitFor();
  });
});

describe('every page', () => {
  const wide = { width: 1440, height: 900 };
  const sizes = [wide, { width: 900, height: 900 }, { width: 400, height: 800 }];

  it.each(['/', '/sign-in', '/try', '/catalogue', '/guide', '/no-such-page'])(
    '%s holds WCAG 2.2 AA in both themes and fits every width',
    async (path) => {
      const one = await visit(browser, server.url);
      try {
        await one.page.goto(path);
        await one.page.getByRole('heading', { level: 1 }).waitFor();
        if (path === '/try') await one.page.locator('[data-grade=refuted]').waitFor();
        expect(await accessibility(one.page)).toEqual([]);
        for (const size of sizes) {
          await one.page.setViewportSize(size);
          const wider = await one.page.evaluate(() => document.documentElement.scrollWidth - innerWidth);
          expect([path, size.width, wider]).toEqual([path, size.width, 0]);
        }
        expect(one.complaints).toEqual([]);
      } finally {
        await one.close();
      }
    },
  );

  it('has one language or both in turn where there is room for one page', async () => {
    const one = await visit(browser, server.url, { viewport: { width: 400, height: 800 } });
    try {
      await one.page.goto('/try');
      const image = one.page.locator('[data-ref="gauge/0"]');
      await image.waitFor();
      await one.page.getByRole('radio', { name: 'spin', exact: true }).check();
      await image.waitFor({ state: 'hidden' });
      await one.page.getByRole('radio', { name: 'gauge', exact: true }).check();
      await image.waitFor();
      await one.page.locator('[data-ref="ising/0"]').waitFor({ state: 'hidden' });
      expect(await accessibility(one.page)).toEqual([]);
    } finally {
      await one.close();
    }
  });
});
