import AxeBuilder from '@axe-core/playwright';
import { chromium, type Browser, type BrowserContextOptions, type Page } from 'playwright-core';
import { expect } from 'vitest';
import { findBrowser } from '../../../scripts/lib/programs.mjs';

/** Debian's Chromium, which finds no machine but this one; as root it runs without its sandbox. */
export function openBrowser(): Promise<Browser> {
  return chromium.launch({
    executablePath: findBrowser() ?? undefined,
    args: [
      ...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
      '--disable-dev-shm-usage',
      '--no-first-run',
      '--disable-background-networking',
      '--host-resolver-rules=MAP * ~NOTFOUND, EXCLUDE 127.0.0.1',
    ],
  });
}

/** A page with what went wrong on it: errors on its console and in its scripts, requests elsewhere. */
export interface WatchedPage {
  page: Page;
  noise: string[];
  close: () => Promise<void>;
}

/**
 * Asking who is signed in, and for a car that one may not see or that is not on the register: a
 * browser reports these answers.
 */
const isAnswer = (text: string, url: string): boolean =>
  (text.includes('status of 401') && /\/api\//.test(url)) ||
  (text.includes('status of 404') && /\/api\/(equipment|register)\//.test(url));

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
  const noise: string[] = [];
  // What the policy forbids is said on the console, as an error, before anything is sent.
  context.on('request', (request) => {
    const url = new URL(request.url());
    const isOwn = url.origin === address || ['data:', 'blob:', 'about:'].includes(url.protocol);
    if (!isOwn) noise.push(`asked ${request.url()}`);
  });
  context.on('weberror', (error) => noise.push(error.error().stack ?? error.error().message));
  context.on('console', (line) => {
    const { url } = line.location();
    if (line.type() === 'error' && !isAnswer(line.text(), url)) noise.push(`${line.text()} ${url}`);
  });
  return { page: await context.newPage(), noise, close: () => context.close() };
}

const everyRule = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'];

/**
 * Fails with each finding of axe and where it stands: WCAG 2.2 A and AA and best practice, or, on
 * paper of another colour, the rules that look at colours.
 */
export async function expectNoAxeFindings(
  page: Page,
  where: string,
  rules: 'all' | 'colours' = 'all',
): Promise<void> {
  const axe = new AxeBuilder({ page }).setLegacyMode();
  if (rules === 'all') axe.options({ resultTypes: ['violations'] }).withTags(everyRule);
  else axe.withRules(['color-contrast', 'link-in-text-block']);
  const { violations } = await axe.analyze();
  const findings = violations.flatMap(({ id, help, nodes }) =>
    nodes.map(
      ({ target, failureSummary }) => `${id}: ${help} at ${target.join(' ')}; ${failureSummary}`,
    ),
  );
  expect(findings, where).toEqual([]);
}
