import type { Page } from 'playwright-core';
import { test } from 'vitest';
import { modelsOf } from '../../server/models/index.js';
import { renumberUnit } from '../../server/services/renumber-unit.js';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { buildWatch } from '../support/watches.js';
import { carTag } from '../support/ingest.js';
import { expectAccessible } from './support/expect-accessible.js';
import { buildCars, buildYards, cross, sendReads } from './support/railway.js';
import { alertRow, heading, ledgerRows, lookUp, signIn } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(100);
const numbers = Array.from({ length: 32 }, (_, index) => index + 1);

/** A fleet with a quiet car, one past its limit, a watch and its alerts; its owner is signed in. */
async function signedIn(): Promise<Page> {
  const { alder, cairn } = await buildYards(db, portal());
  const organisation = await buildCars(db, numbers);
  const owner = await buildPerson(db, { roles: ['owner'], organisation });
  await cross(portal(), alder, [1], 'in');
  await cross(portal(), cairn, [2], 'in');
  await portal().later(1);
  await cross(portal(), alder, [1], 'out');
  await buildWatch(db, owner, { name: 'Gone quiet', createdAt: portal().clock.now() });
  await portal().later(96);
  await cross(portal(), alder, numbers.slice(2), 'in');
  const page = await open();
  await signIn(page, owner.email, PASSWORD);
  return page;
}

test('the sign-in page can be used by everyone', async () => {
  const page = await open();
  await page.goto('/sign-in');
  await page.getByRole('heading', { name: 'Sign in' }).waitFor();
  await expectAccessible(page, 'sign-in');
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.getByText('Your password is wanted here.').waitFor();
  await expectAccessible(page, 'sign-in with faults');
});

test('Fleet can be used by everyone', async () => {
  const page = await signedIn();
  await page.locator('.map-site[data-site="ALDER"]').waitFor();
  await ledgerRows(page).first().waitFor();
  await expectAccessible(page, 'Fleet');
  await page.goto('/fleet?search=nothing');
  await page.getByText('Nothing is left under these filters.').waitFor();
  await expectAccessible(page, 'Fleet filtered to nothing');
});

test("a car's page and the dialog of a watch can be used by everyone", async () => {
  const page = await signedIn();
  await page.goto('/equipment/QTKX1');
  await heading(page, /quiet/).waitFor();
  await page.getByRole('table', { name: 'Passes it was read in' }).waitFor();
  await page.getByRole('table', { name: 'Stays and legs' }).waitFor();
  await expectAccessible(page, 'a car');
  await page.getByRole('button', { name: /^Tell me when/ }).click();
  await page.getByText(/^It covers/).waitFor();
  await expectAccessible(page, 'the dialog of a watch');
});

test('Alerts and watches can be used by everyone', async () => {
  const page = await signedIn();
  await page.goto('/alerts');
  await alertRow(page, 'QTKX 1', 'Quiet since Alder Bend Yard').waitFor();
  await expectAccessible(page, 'Alerts');
  await page.goto('/watches');
  await page.getByRole('cell', { name: 'Gone quiet', exact: true }).waitFor();
  await expectAccessible(page, 'watches');
  await page.getByRole('button', { name: /^Change/ }).click();
  await page.getByText(/^It covers/).waitFor();
  await expectAccessible(page, 'the dialog of a change');
});

test('what is set aside, and what is done about it, can be used by everyone', async () => {
  const { alder } = await buildYards(db, portal());
  const administrator = await buildPerson(db);
  const now = portal().clock.now().getTime();
  const ahead = new Date(now + 3_600_000).toISOString();
  const readAt = new Date(now).toISOString();
  await sendReads(portal(), alder, [
    { antenna: 1, tag: carTag(1), readAt: ahead },
    { antenna: 9, tag: carTag(1), readAt },
    // An EPC of the GS1 rail kind (GIAI-96), as in the standards tests.
    { antenna: 1, tag: '3414257BF400000000003039', readAt },
    { antenna: 1, tag: 'NO READ', readAt },
  ]);
  const page = await open();
  await signIn(page, administrator.email, PASSWORD);
  await page.goto('/set-aside');
  await heading(page, /^4 reads are set aside/).waitFor();
  await expectAccessible(page, 'Set aside');
  await page.getByRole('button', { name: /^Release/ }).click();
  await page.getByText('can not be taken back').waitFor();
  await expectAccessible(page, 'the dialog of a release');
  await page.keyboard.press('Escape');
  await page.getByRole('button', { name: /^Add the antenna/ }).click();
  await page.getByRole('button', { name: 'Add the antenna', exact: true }).click();
  await page.getByText('Which side is wanted.').waitFor();
  await expectAccessible(page, 'the dialog of an antenna, with faults');
  await page.goto('/set-aside?code=unmapped-epc');
  await page.getByRole('table', { name: 'Reads that are set aside' }).waitFor();
  await expectAccessible(page, 'reads that are set aside');
  await page.getByRole('button', { name: /^Say what wears it/ }).click();
  await expectAccessible(page, 'the dialog of a tag');
});

test('a car that was renumbered and is in doubt, and the list of doubts, can be used by everyone', async () => {
  const { alder, cairn } = await buildYards(db, portal());
  const administrator = await buildPerson(db);
  await buildCars(db, [1]);
  await cross(portal(), alder, [1], 'in');
  await portal().later(1);
  const [car] = await modelsOf(db.sequelize).Unit.findAll({ where: { unitKey: 'QTKX1' } });
  const now = portal().clock.now();
  const renumber = { unit: 'QBLX 77', from: now };
  await renumberUnit(db, car?.id ?? 0, renumber, now, administrator.id);
  const points = await modelsOf(db.sequelize).ReadPoint.findAll({ order: ['id'] });
  const pointOf = ({ site }: typeof alder) => points.find((point) => point.siteId === site.id)?.id;
  await db.pool.query(
    `INSERT INTO doubts (unit_id, at, read_point_id, previous_read_point_id, previous_at,
       rail_metres, corroborated_by) VALUES (?, ?, ?, ?, ?, ?, NULL)`,
    [car?.id, now, pointOf(cairn), pointOf(alder), new Date(now.getTime() - 600_000), 212_000],
  );
  const page = await open();
  await signIn(page, administrator.email, PASSWORD);
  await page.goto('/doubts');
  await heading(page, /^1 sighting of 1 car or box in the last 30 days fits no train/).waitFor();
  await expectAccessible(page, 'Doubts');
  await lookUp(page, 'QTKX 1');
  await page.waitForURL('**/equipment/QBLX77');
  await page.getByText('formerly QTKX 1').waitFor();
  await page.getByText(/Two sightings that no train could join: Alder Bend Yard/).waitFor();
  await page.getByRole('table', { name: 'Marks and numbers' }).getByText('former').waitFor();
  await expectAccessible(page, 'a car that was renumbered and is in doubt');
  await page.goto('/equipment/QTKX1');
  await page.waitForURL('**/equipment/QBLX77');
});
