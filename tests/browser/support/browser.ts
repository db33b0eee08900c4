import { type Browser, type BrowserContext, type BrowserContextOptions, type Page, chromium } from 'playwright-core';

/** Debian's Chromium, without a window. */
export const launchBrowser = (): Promise<Browser> =>
  chromium.launch({
    executablePath: '/usr/bin/chromium',
    headless: true,
    args: [
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
      '--disable-dev-shm-usage',
      '--force-color-profile=srgb',
    ],
  });

export interface Visit {
  readonly context: BrowserContext;
  readonly page: Page;
  /** What no page may cause: console errors, uncaught errors, breaches of the content security policy. In order. */
  readonly complaints: readonly string[];
  /** Opens a further page that is watched like the first. */
  readonly another: () => Promise<Page>;
  readonly close: () => Promise<void>;
}

/**
 * A visitor with a context of their own (their own cookies). `expected` names complaints that the test causes on purpose,
 * such as the browser's line for an answer 404.
 */
export async function visit(
  browser: Browser,
  baseURL: string,
  { expected, ...options }: BrowserContextOptions & { readonly expected?: RegExp } = {},
): Promise<Visit> {
  const context = await browser.newContext({ viewport: { width: 1360, height: 900 }, ...options, baseURL });
  const complaints: string[] = [];
  const complain = (text: string): void => {
    if (!expected?.test(text)) complaints.push(text);
  };
  // page.evaluate stands outside the policy's eval rule, so breaches are listened for in every document.
  await context.exposeBinding('reportBreach', (_source, text: string) => complain(text));
  await context.addInitScript(() => {
    document.addEventListener('securitypolicyviolation', (event) => {
      const report = (window as unknown as { reportBreach: (text: string) => void }).reportBreach;
      report(`policy: ${event.violatedDirective} ${event.blockedURI} ${event.sourceFile}:${event.lineNumber}`);
    });
  });
  context.on('console', (message) => {
    if (message.type() === 'error') complain(`console: ${message.text()} (${message.location().url})`);
  });
  context.on('weberror', (failure) => complain(`uncaught: ${failure.error().stack ?? String(failure.error())}`));
  const page = await context.newPage();
  return { context, page, complaints, another: () => context.newPage(), close: () => context.close() };
}
