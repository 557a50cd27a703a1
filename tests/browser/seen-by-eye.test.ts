import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { buildReporter, postReports } from '../support/reports.js';
import { expectNoAxeFindings } from './support/browser.js';
import { buildCars, buildYards, cross } from './support/railway.js';
import { heading, lookUp, signIn } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(10);

test('I see who reported my yard a car, say that it is not there, am warned of the track, and take it back', async () => {
  const { alder } = await buildYards(db, portal());
  await buildCars(db, [40127]);
  const clerk = await buildPerson(db, { roles: ['clerk'], sites: [alder.site], name: 'Ada Quill' });
  await cross(portal(), alder, [40127], 'in');
  await portal().later(10);
  const { token, organisation } = await buildReporter(portal().context);
  const at = portal().clock.now().toISOString();
  const placed = { reference: '4711', unit: 'QTKX 40127', event: 'placed', at, site: 'ALDER' };
  await postReports(portal().address, token, { source: 'car-desk', reports: [placed] }).expect(200);

  const page = await open();
  await signIn(page, clerk.email, PASSWORD);
  await lookUp(page, '40127');
  await heading(page, /QTKX 40127: It stands at Alder Bend Yard/).waitFor();
  const reports = page.getByRole('table', { name: 'Reports' });
  await reports.getByText('placed for loading or unloading').waitFor();
  await reports.getByText(organisation.name).waitFor();

  await page.getByRole('button', { name: 'Report what I saw' }).click();
  const dialog = page.getByRole('dialog', { name: 'QTKX 40127, seen by eye' });
  await dialog.getByText('Expect movement on any track, at any time').waitFor();
  await expectNoAxeFindings(page, 'the form of what was seen');
  await dialog.getByLabel('is not there').check();
  await dialog.getByLabel('Track').fill('7');
  await dialog.getByRole('button', { name: 'Report it as of now' }).click();
  await dialog.waitFor({ state: 'detached' });
  await page.getByText('Reported: not at Alder Bend Yard, track 7.').waitFor();
  const mine = reports.getByRole('row', { name: /looked for, not there/ });
  await mine.getByText('Ada Quill, by eye').waitFor();
  const stay = page.getByRole('table', { name: 'Stays and legs' }).getByRole('row').last();
  await stay.getByText('left: seen by eye').waitFor();
  await heading(page, /QTKX 40127: It is under way, last reported at Alder Bend Yard/).waitFor();

  await page.getByRole('button', { name: 'Undo', exact: true }).click();
  await mine.getByText('taken back by Ada Quill').waitFor();
  expect(await mine.getByRole('button', { name: 'Take back' }).count()).toBe(0);
  expect(await page.getByText('Reported:').count()).toBe(0);
  await heading(page, /QTKX 40127: It stands at Alder Bend Yard/).waitFor();
  await stay.getByText('still there').waitFor();
});
