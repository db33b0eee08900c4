import type { Page } from 'playwright-core';

/** What stories about people begin with. */

export async function signIn(page: Page, name: string): Promise<void> {
  await page.goto('/sign-in');
  await page.getByRole('link', { name: 'Sign in with GitHub' }).click();
  await page.getByRole('link', { name }).click();
  await page.getByRole('heading', { name: 'Shelf', level: 1 }).waitFor();
}

/** The address of the link in the newest mail to someone, once it is there; read from the stand-in's page as a person would. */
export async function linkInMail(page: Page, to: string, subject: RegExp): Promise<string> {
  for (let attempt = 0; attempt < 200; attempt += 1) {
    const answer = await page.request.get(`/auth/stand-in/mail/messages.json?to=${encodeURIComponent(to)}`);
    const { items } = (await answer.json()) as { items: { subject: string; text: string }[] };
    const link = items.find((mail) => subject.test(mail.subject))?.text.match(/https?:\/\/\S+/)?.[0];
    if (link !== undefined) return link;
    await page.waitForTimeout(100);
  }
  throw new Error(`No mail to ${to} with a subject like ${String(subject)} came.`);
}

/** Asks the interface as the page's person: status and answer. */
export async function ask(
  page: Page,
  method: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE',
  path: string,
  body?: unknown,
): Promise<{ readonly status: number; readonly answer: unknown }> {
  return page.evaluate(
    async ([way, where, what]) => {
      const response = await fetch(where, {
        method: way,
        headers: { 'content-type': 'application/json', 'x-gaugewright': '1' },
        ...(what === null ? {} : { body: what }),
      });
      return { status: response.status, answer: (await response.json().catch(() => null)) as unknown };
    },
    [method, path, body === undefined ? null : JSON.stringify(body)] as const,
  );
}

/** Makes a notebook with these statements, one entry each, and opens it. Returns its id. */
export async function notebookOf(page: Page, title: string, entries: readonly string[]): Promise<string> {
  const body = { title, entries: entries.map((text) => ({ kind: 'statements', text })) };
  const { answer } = await ask(page, 'POST', '/api/notebooks', body);
  const { id } = answer as { id: string };
  await page.goto(`/notebooks/${id}`);
  await page.getByRole('heading', { name: title, level: 1 }).waitFor();
  return id;
}

/** Publishes what the page's notebook reads, and waits until its claims are sealed; the page then shows the edition. */
export async function publish(page: Page, notebook: string, summary: string): Promise<number> {
  const { answer } = await ask(page, 'POST', `/api/notebooks/${notebook}/editions`, { summary });
  const { number } = answer as { number: number };
  await page.goto(`/notebooks/${notebook}/editions/${String(number)}`);
  await page.locator('[data-status=sealed]').waitFor({ timeout: 60_000 });
  return number;
}
