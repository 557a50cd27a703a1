import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { buildCars, buildYards, cross } from './support/railway.js';
import { heading, ledgerRows, lookUp, lookUpAnswers, signIn } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(5);

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
