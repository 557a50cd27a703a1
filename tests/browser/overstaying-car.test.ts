import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { linkIn } from './support/mail-link.js';
import { buildYards, cross } from './support/railway.js';
import {
  alertRow,
  askToBeTold,
  fillSignIn,
  heading,
  ledgerRows,
  signIn,
} from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(57);

test('I am told by mail when anything stands over 48 h at my yard, and no longer once it has left for good', async () => {
  const { alder, cairn } = await buildYards(db, portal());
  const sites = [alder.site, cairn.site];
  const dispatcher = await buildPerson(db, { roles: ['dispatcher'], sites });
  await cross(portal(), alder, [7, 8], 'in');
  await cross(portal(), cairn, [9], 'in');

  const page = await open();
  await signIn(page, dispatcher.email, PASSWORD);
  await expect.poll(() => ledgerRows(page).count()).toBe(3);
  const name = 'Standing too long';
  await askToBeTold(page, { name, hours: 48, sites: ['Alder Bend Yard'] });
  await page.getByText('You will be told.').waitFor();

  await portal().later(24);
  await cross(portal(), alder, [8], 'out');
  await portal().later(23);
  expect(await portal().mails()).toEqual([]);
  await portal().later(2);
  const [mail, ...more] = await portal().mails();
  expect(more).toEqual([]);
  expect(mail).toMatchObject({ subject: 'QTKX 7: past its limit, 49 h at Alder Bend Yard' });
  expect(mail?.to).toContain(dispatcher.email);

  const elsewhere = await open();
  await elsewhere.goto(linkIn(mail, '/equipment/'));
  await fillSignIn(elsewhere, dispatcher.email, PASSWORD);
  await heading(elsewhere, /QTKX 7: It stands at Alder Bend Yard/).waitFor();
  await elsewhere.goto(linkIn(mail, '/alerts'));
  await alertRow(elsewhere, 'QTKX 7', 'Stands at Alder Bend Yard').waitFor();

  await cross(portal(), alder, [7], 'out');
  await portal().later(3);
  const cleared = elsewhere.getByRole('link', { name: 'cleared', exact: true });
  await elsewhere.getByText('1 alert wants an answer').waitFor();
  await portal().later(2);
  await elsewhere.getByText('No alert wants an answer.').waitFor();
  await cleared.click();
  await alertRow(elsewhere, 'QTKX 7', 'left the site').waitFor();
  expect(await portal().mails()).toHaveLength(1);
});
