import type { Browser, BrowserContextOptions, Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, beforeEach, expect } from 'vitest';
import type { Database } from '../../../server/lib/database.js';
import { useTestDatabase } from '../../support/database.js';
import { openBrowser, openPage, type WatchedPage } from './browser.js';
import { startPortal, type Portal } from './portal.js';

/** Ten seconds of waiting on two busy cores are a fault; one is not. */
const PATIENCE_MS = 15_000;

/**
 * A server on an empty database for each test, and the browser. A test fails for anything that its
 * pages complained of. `hoursAgo`: where the server's clock begins.
 */
export function usePortal(hoursAgo = 0): {
  db: Database;
  portal: () => Portal;
  /** A page of a browser where nobody is signed in. */
  open: (options?: BrowserContextOptions) => Promise<Page>;
} {
  const db = useTestDatabase();
  let browser: Browser;
  let portal: Portal;
  let pages: WatchedPage[] = [];
  beforeAll(async () => {
    browser = await openBrowser();
  });
  afterAll(() => browser.close());
  beforeEach(async () => {
    pages = [];
    portal = await startPortal(db, hoursAgo);
  });
  afterEach(async ({ task }) => {
    if (task.result?.state === 'fail') await tellWhatStands(pages);
    await Promise.all(pages.map((page) => page.close()));
    await portal.close();
    expect(
      pages.flatMap(({ noise }) => noise),
      'complaints of the pages',
    ).toEqual([]);
  });
  const open = async (options?: BrowserContextOptions) => {
    const opened = await openPage(browser, portal.address, options);
    opened.page.context().setDefaultTimeout(PATIENCE_MS);
    pages.push(opened);
    return opened.page;
  };
  return { db, portal: () => portal, open };
}

/** Without it nobody knows what a page showed instead of what was waited for. */
async function tellWhatStands(pages: WatchedPage[]): Promise<void> {
  for (const page of pages.flatMap((opened) => opened.page.context().pages())) {
    const stands = await page.locator('body').ariaSnapshot();
    process.stdout.write(`\n${page.url()} showed\n${stands}\n`);
  }
}
