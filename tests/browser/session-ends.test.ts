import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { buildCars, buildYards, cross } from './support/railway.js';
import { heading, signIn } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(15);

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
