import type { Page } from 'playwright-core';
import { expect, test } from 'vitest';
import { buildPerson, PASSWORD } from '../support/factories.js';
import { buildCars, buildYards, cross, type Yard } from './support/railway.js';
import { ledgerRows, signIn, soon } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal(100);
/** A page without an event stream asks every twenty seconds. */
const WITHOUT_POLLING_MS = 10_000;
const numbers = (from: number, to: number) =>
  Array.from({ length: to - from + 1 }, (_, index) => from + index);

/**
 * 34 cars: 1 left Alder Bend 99 h ago and is quiet, 2 and 3 stand at Cairn Junction past its 48 h,
 * 4-7 left Alder Bend an hour ago, 8-20 stand there, 21-34 at Cairn Junction. The owner is signed in.
 */
async function fleet(): Promise<{ page: Page; alder: Yard; cairn: Yard }> {
  const { alder, cairn } = await buildYards(db, portal());
  const organisation = await buildCars(db, numbers(1, 34));
  const owner = await buildPerson(db, { roles: ['owner'], organisation });
  await cross(portal(), alder, [1], 'in');
  await cross(portal(), cairn, [2, 3], 'in');
  await portal().later(1);
  await cross(portal(), alder, [1], 'out');
  await portal().later(96);
  await cross(portal(), alder, numbers(4, 20), 'in');
  await cross(portal(), cairn, numbers(21, 34), 'in');
  await portal().later(1);
  await cross(portal(), alder, numbers(4, 7), 'out');
  await portal().later(1);
  const page = await open();
  await signIn(page, owner.email, PASSWORD);
  return { page, alder, cairn };
}

const where = (page: Page) => page.url().slice(portal().address.length);
const carsOf = async (page: Page) =>
  (await ledgerRows(page).locator('[data-row-link]').allTextContents()).map((text) =>
    Number(text.replace('QTKX ', '')),
  );
const expectCars = (page: Page, cars: number[]) =>
  soon(async () => (await carsOf(page)).sort((one, other) => one - other)).toEqual(cars);

test('each number of the sentence shows me its cars, and what I chose survives reload and going back', async () => {
  const { page } = await fleet();
  const sentence = page.getByRole('heading', { level: 1 });
  await sentence.getByRole('link', { name: '5', exact: true }).click();
  await expectCars(page, [1, 4, 5, 6, 7]);
  expect(where(page)).toBe('/fleet?state=enRoute');
  await sentence.getByRole('link', { name: '1', exact: true }).click();
  await expectCars(page, [1]);
  expect(where(page)).toBe('/fleet?quiet=true');
  await sentence.getByRole('link', { name: '2', exact: true }).click();
  await expectCars(page, [2, 3]);
  expect(where(page)).toBe('/fleet?pastLimit=true');
  await page.reload();
  await expectCars(page, [2, 3]);
  await page.goBack();
  await expectCars(page, [1]);
  expect(where(page)).toBe('/fleet?quiet=true');
  await page.getByRole('link', { name: 'drop all' }).click();
  await soon(() => where(page)).toBe('/fleet');
});

test('the map and the table say the same', async () => {
  const { page } = await fleet();
  const ring = (code: string) => page.locator(`.map-site[data-site="${code}"]`);
  await ring('ALDER').getByText('13', { exact: true }).waitFor();
  await ring('CAIRN').getByText('16', { exact: true }).waitFor();
  await page.goto('/fleet?state=onHand');
  await ring('ALDER').click();
  await expectCars(page, numbers(8, 20));
  expect(where(page)).toContain('site=ALDER');
  await ring('CAIRN').click();
  await expectCars(page, [2, 3, ...numbers(21, 34)]);
  await ring('CAIRN').click();
  await soon(() => where(page)).toBe('/fleet?state=onHand');
});

test('a car that is read moves before my eyes, but nothing moves under my hand', async () => {
  const { page, alder, cairn } = await fleet();
  await page.goto('/fleet?state=enRoute&sort=-lastSeen');
  const row = (number: number) =>
    ledgerRows(page).filter({ has: page.getByText(`QTKX ${number}`, { exact: true }) });
  await row(4).getByText('From Alder Bend Yard').waitFor();
  await soon(() => carsOf(page)).toEqual([7, 6, 5, 4, 1]);
  await page.evaluate(() => Object.assign(window, { sameDocument: true }));

  await cross(portal(), cairn, [4], 'in');
  await soon(() => carsOf(page), WITHOUT_POLLING_MS).toEqual([7, 6, 5, 1]);
  const moving = page.getByRole('heading', { level: 1, name: /^4 of your/ });
  await moving.waitFor();

  await row(6).getByRole('link').focus();
  await cross(portal(), cairn, [7], 'in');
  await cross(portal(), alder, [8], 'out');
  await page.getByText('2 changed, show').waitFor();
  expect(await carsOf(page)).toEqual([7, 6, 5, 1]);
  expect(await row(7).getAttribute('data-gone')).toBe('true');
  await page.getByRole('button', { name: 'show' }).click();
  await soon(() => carsOf(page)).toEqual([8, 6, 5, 1]);

  await page.locator('body').click({ position: { x: 4, y: 500 } });
  await ledgerRows(page).nth(1).hover();
  await cross(portal(), alder, [9], 'out');
  await page.getByText('1 changed, show').waitFor();
  expect(await carsOf(page)).toEqual([8, 6, 5, 1]);
  await page.mouse.move(10, 500);
  await soon(() => carsOf(page)).toEqual([9, 8, 6, 5, 1]);
  expect(await page.evaluate(() => 'sameDocument' in window)).toBe(true);
});
