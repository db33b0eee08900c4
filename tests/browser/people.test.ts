import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type RunningServer, startServer } from '../support/server.ts';
import { accessibility } from './support/accessible.ts';
import { launchBrowser, visit, type Visit } from './support/browser.ts';
import { ask, linkInMail, notebookOf, publish, signIn } from './support/people.ts';

/** Accounts, invitations, notices, links and stewardship, as people go through them. */

let browser: Browser;
let server: RunningServer;
beforeAll(async () => {
  const settings = { STEWARDS: 'y.sandoval@marrowfield.example' };
  [browser, server] = await Promise.all([launchBrowser(), startServer({ worker: true, settings })]);
});
afterAll(async () => {
  await browser?.close();
  await server?.stop();
});

const narrow = async (page: Page): Promise<number> => {
  await page.setViewportSize({ width: 400, height: 800 });
  const wider = await page.evaluate(() => document.documentElement.scrollWidth - innerWidth);
  await page.setViewportSize({ width: 1360, height: 900 });
  return wider;
};

describe('an account', () => {
  let one: Visit;
  beforeAll(async () => {
    one = await visit(browser, server.url, { expected: /status of (404|409)/ });
  });
  afterAll(() => one?.close());

  it('is made by a link that is sent by mail, and the name is asked for once', async () => {
    const { page } = one;
    await page.goto('/sign-in');
    await page.getByLabel('Or by a link that is sent to your e-mail address').fill('E.Lindqvist@example.org');
    await page.getByRole('button', { name: 'send the link' }).click();
    await page.getByText('A link is on its way').waitFor();
    const link = await linkInMail(page, 'e.lindqvist@example.org', /sign in/i);
    await page.goto(link);
    await page.getByRole('button', { name: 'Sign in now' }).click();
    await page.getByLabel('The name you publish under', { exact: false }).fill('E. Lindqvist');
    await page.getByRole('button', { name: 'Sign in now' }).click();
    await page.getByRole('heading', { name: 'Shelf', level: 1 }).waitFor();
    await page.getByRole('link', { name: 'E. Lindqvist' }).waitFor();
    // The link was for one time.
    const other = await visit(browser, server.url, { expected: /status of 404/ });
    await other.page.goto(link);
    await other.page.getByRole('button', { name: 'Sign in now' }).click();
    await other.page.getByRole('alert').waitFor();
    expect(await accessibility(other.page)).toEqual([]);
    await other.close();
  });

  it('has a profile whose ORCID iD is checked before it is saved', async () => {
    const { page } = one;
    await page.getByRole('link', { name: 'E. Lindqvist' }).click();
    await page.getByRole('heading', { name: 'Account', level: 1 }).waitFor();
    await page.getByLabel('ORCID iD').fill('0000-0002-1825-0098');
    await page.getByText('one of them is mistyped').waitFor();
    expect(await page.getByRole('button', { name: 'save the profile' }).isDisabled()).toBe(true);
    await page.getByLabel('ORCID iD').fill('https://orcid.org/0000-0002-1825-0097');
    await page.getByLabel('Affiliation').fill('Marrowfield Institute');
    await page.getByRole('button', { name: 'save the profile' }).click();
    await page.getByText('saved', { exact: true }).waitFor();
    await page.reload();
    await page.getByLabel('ORCID iD').waitFor();
    expect(await page.getByLabel('ORCID iD').inputValue()).toBe('0000-0002-1825-0097');
    expect(await accessibility(page)).toEqual([]);
    expect(await narrow(page)).toBe(0);
  });

  it('has tokens whose secret is shown once and works until it is revoked', async () => {
    const { page } = one;
    await page.getByLabel('What a new token is for').fill('nightly script');
    await page.getByRole('button', { name: 'make the token' }).click();
    const secret = await page.getByRole('status').locator('code').innerText();
    const withToken = () => fetch(`${server.url}/api/shelf`, { headers: { authorization: `Bearer ${secret}` } });
    expect((await withToken()).status).toBe(200);
    await page.reload();
    await page.getByText('nightly script').first().waitFor();
    expect(await page.getByText(secret).count()).toBe(0);
    await page.getByRole('button', { name: 'revoke nightly script' }).click();
    await page.getByText('None yet.').waitFor();
    expect((await withToken()).status).toBe(401);
  });

  it('is deleted when its handle is typed, and is gone', async () => {
    const { page } = one;
    await page.getByRole('button', { name: 'delete the account' }).click();
    const field = page.getByLabel('To confirm, type your handle', { exact: false });
    const handle = await page.getByLabel('Handle, by which others').inputValue();
    await field.fill(`${handle}x`);
    expect(await page.getByRole('button', { name: 'delete the account for good' }).isDisabled()).toBe(true);
    await field.fill(handle);
    await page.getByRole('button', { name: 'delete the account for good' }).click();
    await page.getByRole('link', { name: 'Sign in' }).waitFor();
    expect(one.complaints).toEqual([]);
  });
});

describe('an invitation', () => {
  it('comes by mail, is accepted by its link, and a notice tells who sent it', async () => {
    const owner = await visit(browser, server.url);
    const invited = await visit(browser, server.url, { expected: /status of 409/ });
    await signIn(owner.page, 'R. Okafor');
    await notebookOf(owner.page, 'A chain to review', ['lattice chain torus 8\nspins s on vertices']);
    await owner.page.getByRole('button', { name: 'people and rights' }).click();
    await owner.page.getByLabel('Invite by e-mail').fill('k.osei@example.org');
    await owner.page.getByLabel('Invited as').selectOption('referee');
    await owner.page.getByRole('button', { name: 'send the invitation' }).click();
    await owner.page
      .getByRole('list', { name: 'Open invitations' })
      .getByText('k.osei@example.org', { exact: true })
      .waitFor();
    expect(await accessibility(owner.page)).toEqual([]);

    await invited.page.goto(await linkInMail(invited.page, 'k.osei@example.org', /invites you/));
    await invited.page.getByText('as referee', { exact: false }).waitFor();
    expect(await accessibility(invited.page)).toEqual([]);
    await invited.page.getByRole('button', { name: 'Accept, and sign in with this address' }).click();
    await invited.page.getByLabel('The name you publish under', { exact: false }).fill('K. Osei');
    await invited.page.getByRole('button', { name: 'Accept, and sign in with this address' }).click();
    await invited.page.getByRole('heading', { name: 'A chain to review', level: 1 }).waitFor();

    // Told on the page that is open, without a reload.
    await owner.page.getByRole('link', { name: /Notices 1/ }).click();
    await owner.page.getByRole('link', { name: /K\. Osei/ }).waitFor();
    expect(await accessibility(owner.page)).toEqual([]);
    expect(await narrow(owner.page)).toBe(0);
    await owner.page.getByRole('button', { name: 'mark all as read' }).click();
    await owner.page.getByRole('link', { name: 'Notices', exact: true }).waitFor();
    expect([...owner.complaints, ...invited.complaints]).toEqual([]);
    await owner.close();
    await invited.close();
  });

  it('can be withdrawn, and then leads nowhere', async () => {
    const owner = await visit(browser, server.url);
    await signIn(owner.page, 'L. Brandt');
    await notebookOf(owner.page, 'Not for everyone', ['lattice chain torus 8']);
    await owner.page.getByRole('button', { name: 'people and rights' }).click();
    await owner.page.getByLabel('Invite by e-mail').fill('nobody@example.org');
    await owner.page.getByRole('button', { name: 'send the invitation' }).click();
    const link = await linkInMail(owner.page, 'nobody@example.org', /invites you/);
    await owner.page.getByRole('button', { name: /^withdraw the invitation/ }).click();
    await owner.page.getByText('nobody@example.org', { exact: true }).waitFor({ state: 'detached' });
    const late = await visit(browser, server.url, { expected: /status of 404/ });
    await late.page.goto(link);
    await late.page.getByText('This invitation is not open', { exact: false }).waitFor();
    await owner.close();
    await late.close();
  });
});

describe('a link to an edition', () => {
  it('opens it to whoever has it, and to nobody after it was withdrawn', async () => {
    const owner = await visit(browser, server.url);
    await signIn(owner.page, 'R. Okafor');
    const notebook = await notebookOf(owner.page, 'Shown by link', ['lattice chain torus 8\nspins s on vertices']);
    await publish(owner.page, notebook, 'A lattice');
    await owner.page.goto(`/notebooks/${notebook}`);
    await owner.page.getByRole('button', { name: 'share' }).click();
    await owner.page.getByRole('button', { name: 'make it', exact: true }).click();
    const link = await owner.page.getByRole('link', { name: /\/shared\// }).innerText();
    const reader = await visit(browser, server.url, { expected: /status of 404/ });
    await reader.page.goto(link);
    await reader.page.getByRole('heading', { name: 'Shown by link', level: 1 }).waitFor();
    expect(reader.complaints).toEqual([]);
    await owner.page.getByRole('button', { name: 'withdraw', exact: true }).click();
    await owner.page.getByRole('button', { name: 'withdraw it for everyone' }).click();
    await owner.page.getByRole('link', { name: /\/shared\// }).waitFor({ state: 'detached' });
    expect((await ask(reader.page, 'GET', `/api/linked/${link.split('/').at(-1) ?? ''}`)).status).toBe(404);
    await reader.page.goto(link);
    await reader.page.getByRole('heading', { name: 'There is no such page' }).waitFor();
    await owner.close();
    await reader.close();
  });
});

describe('stewardship', () => {
  it('shows health, people, jobs, mail and limits to a steward, and no such page to others', async () => {
    const steward = await visit(browser, server.url);
    await signIn(steward.page, 'Y. Sandoval');
    for (const part of ['health', 'people', 'jobs', 'mail', 'limits']) {
      await steward.page.goto(`/steward?part=${part}`);
      await steward.page.getByRole('heading', { name: 'Stewardship', level: 1 }).waitFor();
      await steward.page.waitForLoadState('networkidle').catch(() => undefined);
      expect(await steward.page.getByRole('alert').count()).toBe(0);
      expect([part, await accessibility(steward.page)]).toEqual([part, []]);
      expect([part, await narrow(steward.page)]).toEqual([part, 0]);
    }
    await steward.page.getByLabel('Notebooks of one person').fill('0');
    expect(await steward.page.getByRole('button', { name: 'set the limits' }).isDisabled()).toBe(true);
    expect(steward.complaints).toEqual([]);
    const other = await visit(browser, server.url);
    await signIn(other.page, 'D. Quell');
    await other.page.goto('/steward');
    await other.page.getByRole('heading', { name: 'There is no such page' }).waitFor();
    await steward.close();
    await other.close();
  });
});
