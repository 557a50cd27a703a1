import type { Page } from 'playwright-core';
import { expect } from 'vitest';
import { expectNoAxeFindings } from './browser.js';

/** Looks at the page as it stands in both widths, on light and dark paper, and whether 320 px do. */
export async function expectAccessible(page: Page, what: string): Promise<void> {
  for (const width of [1440, 360]) {
    await page.setViewportSize({ width, height: 900 });
    await page.emulateMedia({ colorScheme: 'light' });
    await expectNoAxeFindings(page, `${what}, ${width} px, light`);
    await page.emulateMedia({ colorScheme: 'dark' });
    await expectNoAxeFindings(page, `${what}, ${width} px, dark`, 'colours');
  }
  await page.setViewportSize({ width: 320, height: 900 });
  const across = await page.evaluate(() => document.documentElement.scrollWidth);
  expect(across, `${what} in 320 px`).toBe(320);
  await page.setViewportSize({ width: 1440, height: 900 });
}
