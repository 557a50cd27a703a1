import type { Page } from 'playwright-core';
import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { buildCars, buildYards, cross } from './support/railway.js';
import { heading } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(5);

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
  await expect.poll(() => answers.count()).toBe(2);
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
