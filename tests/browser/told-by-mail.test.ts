import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { linkIn } from './support/mail-link.js';
import { buildCars, buildYards, cross } from './support/railway.js';
import {
  alertRow,
  askToBeTold,
  fillSignIn,
  heading,
  ledgerRows,
  lookUp,
  signIn,
  soon,
} from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(75);

test('I find my car by its number alone, am told by mail when it goes quiet, and no longer once it is read', async () => {
  const { alder, cairn } = await buildYards(db, portal());
  const organisation = await buildCars(db, [40126, 40127, 40128]);
  const owner = await buildPerson(db, { roles: ['owner'], organisation });
  await cross(portal(), alder, [40126, 40127, 40128], 'in');
  await portal().later(1);
  await cross(portal(), alder, [40127], 'out');

  const page = await open();
  await signIn(page, owner.email, PASSWORD);
  await lookUp(page, '40127');
  await heading(page, /QTKX 40127: It is under way, last read at Alder Bend Yard/).waitFor();
  expect(new URL(page.url()).pathname).toBe('/equipment/QTKX40127');
  await askToBeTold(page, { name: 'My car' });
  await page.getByText('You will be told.').waitFor();

  await portal().later(71);
  expect(await portal().mails()).toEqual([]);
  await portal().later(2);
  const [mail, ...more] = await portal().mails();
  expect(more).toEqual([]);
  expect(mail).toMatchObject({ subject: 'QTKX 40127: quiet 3 d' });
  expect(mail?.to).toContain(owner.email);

  const elsewhere = await open();
  await elsewhere.goto(linkIn(mail, '/equipment/'));
  await fillSignIn(elsewhere, owner.email, PASSWORD);
  const quiet = /QTKX 40127: It is quiet: not read since Alder Bend Yard/;
  await heading(elsewhere, quiet).waitFor();
  const again = await elsewhere.context().newPage();
  await again.goto(linkIn(mail, '/equipment/'));
  await heading(again, quiet).waitFor();

  await again.getByRole('link', { name: '1 alert to answer' }).click();
  await alertRow(again, 'QTKX 40127', 'Quiet since Alder Bend Yard').waitFor();

  await cross(portal(), cairn, [40127], 'in');
  await portal().later(0);
  await again.getByText('No alert wants an answer.').waitFor();
  await again.getByText('no alerts to answer').waitFor();
  await heading(elsewhere, /QTKX 40127: It stands at Cairn Junction/).waitFor();
  await again.getByRole('link', { name: 'cleared', exact: true }).click();
  await alertRow(again, 'QTKX 40127', 'read again').waitFor();
  expect(await portal().mails()).toHaveLength(1);
});

test('I am told by mail when anything stands over 48 h at my yard, and no longer once it has left for good', async () => {
  const { alder, cairn } = await buildYards(db, portal());
  const sites = [alder.site, cairn.site];
  const dispatcher = await buildPerson(db, { roles: ['dispatcher'], sites });
  await cross(portal(), alder, [7, 8], 'in');
  await cross(portal(), cairn, [9], 'in');

  const page = await open();
  await signIn(page, dispatcher.email, PASSWORD);
  await soon(() => ledgerRows(page).count()).toBe(3);
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
