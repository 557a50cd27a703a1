import AxeBuilder from '@axe-core/playwright';
import { chromium, type Browser, type BrowserContextOptions, type Page } from 'playwright-core';
import { expect } from 'vitest';

/** Debian's Chromium; as root it runs without its sandbox. */
export function openBrowser(): Promise<Browser> {
  return chromium.launch({
    executablePath: '/usr/bin/chromium',
    args: process.getuid?.() === 0 ? ['--no-sandbox'] : [],
  });
}

/** A page with what went wrong on it; `noise` grows with errors on its console and in its scripts. */
export interface WatchedPage {
  page: Page;
  noise: string[];
  close: () => Promise<void>;
}

/** Being signed out is asked for and answered with 401, which a browser always reports. */
const asked = /status of 401/;

/** Opens a page of its own cookie jar; addresses without host go to `address`. */
export async function openPage(
  browser: Browser,
  address: string,
  options: BrowserContextOptions = {},
): Promise<WatchedPage> {
  const context = await browser.newContext({
    baseURL: address,
    viewport: { width: 1440, height: 900 },
    reducedMotion: 'reduce',
    ...options,
  });
  const page = await context.newPage();
  const noise: string[] = [];
  page.on('pageerror', (error) => noise.push(error.stack ?? error.message));
  page.on('console', (line) => {
    if (line.type() === 'error' && !asked.test(line.text())) noise.push(line.text());
  });
  return { page, noise, close: () => context.close() };
}

/** Fails with each finding of axe (WCAG 2.2 A and AA, best practice) and where it stands. */
export async function expectNoAxeFindings(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'])
    .analyze();
  const findings = violations.flatMap(({ id, help, nodes }) =>
    nodes.map(
      ({ target, failureSummary }) => `${id}: ${help} at ${target.join(' ')}; ${failureSummary}`,
    ),
  );
  expect(findings).toEqual([]);
}
