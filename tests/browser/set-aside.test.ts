import type { Page } from 'playwright-core';
import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { carTag } from '../support/ingest.js';
import { buildCars, buildYards, sendReads } from './support/railway.js';
import { heading, signIn, soon } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal();

/** An EPC of the GS1 rail kind (GIAI-96), as in the standards tests. */
const GIAI = '3414257BF400000000003039';
const after = (minutes: number) =>
  new Date(portal().clock.now().getTime() + minutes * 60_000).toISOString();

/** Reads that the projector has not come to use yet. */
async function countHeld(): Promise<number | undefined> {
  const [row] = await db.pool.query<{ n: number }[]>('SELECT COUNT(*) AS n FROM held');
  return row?.n;
}

/** An administrator, signed in, at Set aside. */
async function setAside(): Promise<Page> {
  const administrator = await buildPerson(db);
  const page = await open();
  await signIn(page, administrator.email, PASSWORD);
  await page.getByRole('link', { name: 'Set aside' }).first().click();
  return page;
}

test('I release what a clock ahead kept back, and the car shows where it was', async () => {
  const { alder } = await buildYards(db, portal());
  await buildCars(db, [1]);
  await sendReads(
    portal(),
    alder,
    [1, 2].map((antenna) => ({ antenna, tag: carTag(1), readAt: after(6 + antenna / 60) })),
  );
  portal().clock.advance(10 * 60_000);
  const page = await setAside();
  await heading(page, /^2 reads are set aside: all with a clock ahead\.$/).waitFor();
  const row = page.getByRole('table', { name: 'Clock ahead' }).getByRole('row').nth(1);
  expect(await row.textContent()).toContain('Alder Bend Yard');
  await row.getByRole('button', { name: /^Release/ }).click();
  const dialog = page.getByRole('dialog', { name: 'Release reads of Alder Bend Yard' });
  await dialog.getByText('can not be taken back').waitFor();
  await dialog.getByRole('button', { name: 'Release 2 reads' }).click();
  await page.getByText('2 reads are released.').waitFor();
  await heading(page, /^Nothing is set aside\.$/).waitFor();
  await page.goto('/equipment/QTKX1');
  await heading(page, /Alder Bend Yard/).waitFor();
});

test('I add the antenna and say what wears the tag, and their reads are used', async () => {
  const { alder } = await buildYards(db, portal());
  await buildCars(db, [1, 2]);
  await sendReads(portal(), alder, [
    { antenna: 3, tag: carTag(1), readAt: after(-30) },
    { antenna: 1, tag: GIAI, readAt: after(-20) },
  ]);
  const page = await setAside();
  await heading(page, /^2 reads are set aside/).waitFor();
  await page.getByRole('button', { name: 'Add the antenna of Alder Bend Yard' }).click();
  const antenna = page.getByRole('dialog', { name: 'Add an antenna at Alder Bend Yard' });
  await antenna.getByLabel('Offset along the track, m').fill('6');
  await antenna.getByLabel('Side of the track').selectOption('left');
  await antenna.getByRole('button', { name: 'Add the antenna' }).click();
  await page.getByText('Antenna 3 of Alder Bend Yard is added.').waitFor();

  await page.getByRole('link', { name: /^Say what wears them/ }).click();
  await page.getByRole('button', { name: /^Say what wears it/ }).click();
  const tag = page.getByRole('dialog', { name: 'Say what wears this tag' });
  await tag.getByLabel('Car or box').fill('QTKX 77');
  await tag.getByRole('button', { name: 'Put it on' }).click();
  await tag.getByText('It is not on the register.').waitFor();
  await tag.getByLabel('Car or box').fill('qtkx 2');
  await tag.getByRole('button', { name: 'Put it on' }).click();
  await page.getByText('wears the tag now').waitFor();
  await soon(countHeld).toBe(0);
  await page.goto('/set-aside');
  await heading(page, /^Nothing is set aside\.$/).waitFor();
  for (const car of ['QTKX1', 'QTKX2']) {
    await page.goto(`/equipment/${car}`);
    await heading(page, /Alder Bend Yard/).waitFor();
  }
});
