import { AxeBuilder } from '@axe-core/playwright';
import type { Page } from 'playwright-core';

const rules = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'];

/**
 * What axe finds against WCAG 2.2 AA on the page as it stands, in the light and in the dark theme: one line for each
 * element, so that `expect(await accessibility(page)).toEqual([])` prints what to mend. The page must come from a
 * context of its own (`browser.newContext`). Leaves the page in the light theme.
 */
export async function accessibility(page: Page): Promise<readonly string[]> {
  const found: string[] = [];
  for (const colorScheme of ['dark', 'light'] as const) {
    await page.emulateMedia({ colorScheme, reducedMotion: 'reduce' });
    const { violations } = await new AxeBuilder({ page }).withTags(rules).analyze();
    for (const { id, nodes } of violations) {
      for (const node of nodes)
        found.push(`${colorScheme} ${id}: ${node.target.join(' ')} ${node.failureSummary ?? ''}`);
    }
  }
  return found;
}
