import type { Page } from 'playwright-core';
import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { buildCars, buildYards, cross } from './support/railway.js';
import { heading, ledgerRows, lookUp, lookUpAnswers, signIn, soon } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(15);

/** Presses Tab until the focus is on what is named so; fails when it comes round without. */
async function tabTo(page: Page, role: 'button' | 'textbox' | 'link', name: string | RegExp) {
  const wanted = page.getByRole(role, { name, exact: typeof name === 'string' });
  for (let presses = 0; presses < 60; presses += 1) {
    const isThere = await wanted.evaluateAll((elements) =>
      elements.some((element) => element === document.activeElement),
    );
    if (isThere) return;
    await page.keyboard.press('Tab');
  }
  throw new Error(`Tab never came to ${String(name)}.`);
}

test('I sign in, look a car up, open it and ask to be told, without touching the mouse', async () => {
  const { alder } = await buildYards(db, portal());
  const organisation = await buildCars(db, [40127, 401270]);
  const owner = await buildPerson(db, { roles: ['owner'], organisation });
  await cross(portal(), alder, [40127, 401270], 'in');
  const page = await open();
  await page.goto('/sign-in');
  await page.getByRole('heading', { name: 'Sign in' }).waitFor();
  await tabTo(page, 'textbox', 'E-mail address');
  await page.keyboard.type(owner.email);
  await page.keyboard.press('Tab');
  await page.keyboard.type(PASSWORD);
  await page.keyboard.press('Enter');
  await heading(page, /moving/).waitFor();

  await page.keyboard.press('/');
  await page.keyboard.type('4012');
  const answers = page.getByRole('listbox', { name: 'What was found' }).getByRole('option');
  await soon(() => answers.count()).toBe(2);
  await page.keyboard.press('ArrowDown');
  await page.keyboard.press('ArrowDown');
  const chosen = (await answers.and(page.locator('[aria-selected=true]')).innerText()).split('\n');
  await page.keyboard.press('Enter');
  await heading(page, new RegExp(`^${chosen[0]}: It stands`)).waitFor();

  await page.keyboard.press('/');
  await page.keyboard.type('40127');
  await page.keyboard.press('Enter');
  await heading(page, /^QTKX 40127: It stands/).waitFor();

  await tabTo(page, 'button', /^Tell me when/);
  await page.keyboard.press('Enter');
  await page.getByRole('dialog', { name: 'Ask to be told' }).waitFor();
  await tabTo(page, 'textbox', 'Hours');
  await page.keyboard.press('ControlOrMeta+a');
  await page.keyboard.type('24');
  await tabTo(page, 'textbox', 'Name of this watch');
  await page.keyboard.press('ControlOrMeta+a');
  await page.keyboard.type('By hand');
  await tabTo(page, 'button', 'Tell me');
  await page.keyboard.press('Enter');
  await page.getByText('You will be told.').waitFor();
  expect(await page.evaluate(() => document.activeElement?.textContent)).toMatch(/^Tell me when/);
});

test('when my session ends while I fill a form, I sign in over it and nothing I typed is lost', async () => {
  const { alder } = await buildYards(db, portal());
  const organisation = await buildCars(db, [501]);
  const owner = await buildPerson(db, { roles: ['owner'], organisation });
  await cross(portal(), alder, [501], 'in');
  const page = await open();
  await signIn(page, owner.email, PASSWORD);
  await page.goto('/equipment/QTKX501');
  await heading(page, /QTKX 501/).waitFor();
  await page.getByRole('button', { name: /^Tell me when/ }).click();
  const form = page.getByRole('dialog', { name: 'Ask to be told' });
  await form.getByText(/^It covers/).waitFor();
  await form.getByLabel('Hours').fill('30');
  await form.getByLabel('also while it stands at a site').check();
  await form.getByLabel('Name of this watch').fill('The one that always gets lost');

  portal().clock.advance(13 * 3_600_000);
  await form.getByRole('button', { name: 'Tell me', exact: true }).click();
  const over = page.getByRole('dialog', { name: 'Your session has ended' });
  await over.getByLabel('Password').fill('not this one');
  await over.getByRole('button', { name: 'Sign in' }).click();
  await over.getByText('Address or password is not right.').waitFor();
  await over.getByLabel('Password').fill(PASSWORD);
  await over.getByRole('button', { name: 'Sign in' }).click();
  await over.waitFor({ state: 'detached' });

  // What was pressed before the sign-in goes out after it.
  await page.getByText('You will be told.').waitFor();
  expect(new URL(page.url()).pathname).toBe('/equipment/QTKX501');
  await page.goto('/watches');
  const row = page.getByRole('row').filter({ hasText: 'The one that always gets lost' });
  await row.getByText('QTKX 501 has not been read for 30 h, standing at a site or not').waitFor();
  expect(await page.getByRole('table', { name: 'Watches' }).getByRole('row').count()).toBe(2);
});

test("another owner's car is nothing to me: not in my fleet, not by its number, not at its address", async () => {
  const { alder } = await buildYards(db, portal());
  const organisation = await buildCars(db, [501]);
  await buildCars(db, [777]);
  const owner = await buildPerson(db, { roles: ['owner'], organisation });
  await cross(portal(), alder, [501, 777], 'in');
  const page = await open();
  await signIn(page, owner.email, PASSWORD);
  await ledgerRows(page).filter({ hasText: 'QTKX 501' }).waitFor();
  expect(await ledgerRows(page).count()).toBe(1);

  await lookUp(page, '777');
  await page.getByText('Nothing that you may see goes by “777”.').waitFor();
  expect(await lookUpAnswers(page).count()).toBe(0);
  expect(new URL(page.url()).pathname).toBe('/fleet');

  await page.goto('/equipment/QTKX777');
  await heading(page, /QTKX777 is not a car or box you may see/).waitFor();
  expect(await page.getByText('Alder Bend Yard').count()).toBe(0);
});
