import type { Locator, Page } from 'playwright-core';
import { expect } from 'vitest';

/** Signs in on the sign-in page and waits for the first screen. */
export async function signIn(page: Page, email: string, password: string): Promise<void> {
  await page.goto('/sign-in');
  await fillSignIn(page, email, password);
  await page
    .getByRole('heading', { level: 1, name: /moving|stands? at|register yet|been read yet/ })
    .waitFor();
}

/** Fills and sends a sign-in form that is on screen, be it the page's or the one over a page. */
export async function fillSignIn(page: Page, email: string, password: string): Promise<void> {
  await page.getByLabel('E-mail address').fill(email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
}

/** Types into the look-up field, which `/` goes to, and presses Enter. */
export async function lookUp(page: Page, typed: string): Promise<void> {
  await page.locator('main').press('/');
  await page.keyboard.type(typed);
  await page.keyboard.press('Enter');
}

/** What the look-up field answers where it does not simply open a car. */
export const lookUpAnswers = (page: Page): Locator =>
  page.getByRole('listbox', { name: 'What was found' }).getByRole('option');

/** Rows of the ledger that are drawn. */
export const ledgerRows = (page: Page): Locator =>
  page.locator('table.ledger tbody tr[data-index]');

/** What a watch asks for; what is left out stays as the dialog offers it. */
export interface AskedWatch {
  looksFor?: 'has not been read for' | 'has stood over';
  hours?: number;
  /** Names of sites to tick. */
  sites?: string[];
  name: string;
}

/** Opens the sentence with blanks from the page, fills it, sends it, and waits until it is kept. */
export async function askToBeTold(page: Page, asked: AskedWatch): Promise<void> {
  await page.getByRole('button', { name: /^Tell me when/ }).click();
  const dialog = page.getByRole('dialog', { name: 'Ask to be told' });
  if (asked.looksFor) {
    await dialog.getByLabel('What to look for').selectOption({ label: asked.looksFor });
  }
  if (asked.hours !== undefined) await dialog.getByLabel('Hours').fill(String(asked.hours));
  if (asked.sites) {
    await dialog.getByRole('button', { name: /^Sites:/ }).click();
    for (const site of asked.sites) await dialog.getByRole('checkbox', { name: site }).check();
    await page.keyboard.press('Escape');
  }
  await dialog.getByLabel('Name of this watch').fill(asked.name);
  await dialog.getByText(/^It covers/).waitFor();
  await dialog.getByRole('button', { name: 'Tell me', exact: true }).click();
  await dialog.waitFor({ state: 'detached' });
}

/** The page's opening sentence, once it says this. */
export const heading = (page: Page, name: RegExp): Locator =>
  page.getByRole('heading', { level: 1, name });

/** The row of the alerts about a car that also says this. */
export const alertRow = (page: Page, display: string, says: string): Locator =>
  page
    .getByRole('table', { name: 'Alerts' })
    .getByRole('row')
    .filter({ hasText: display })
    .filter({ hasText: says });

/** Waits until what is read comes to what is then expected of it. */
export const soon = <Value>(read: () => Value | Promise<Value>, timeout = 15_000) =>
  expect.poll(read, { timeout, interval: 50 });
