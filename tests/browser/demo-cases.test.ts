import { expect, test } from 'vitest';
import { showRegister } from '../../server/simulator/show-register.js';
import { world } from '../../server/simulator/world.js';
import { seedDemo } from '../support/demo-seed.js';
import { expectAccessible } from './support/expect-accessible.js';
import { heading, signIn } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal();

test('the demo says what to look at, and its links open the cars that show it', async () => {
  await seedDemo(db);
  await showRegister(db);
  portal().context.env.demo = true;
  const page = await open();
  await signIn(page, 'admin@fishplate.example', world.password);
  await page.getByRole('button', { name: /Ines Abernethy/ }).click();
  await page.getByRole('link', { name: 'What to look at in this demo' }).click();
  await heading(page, /shows 17 cases/).waitFor();
  await expectAccessible(page, 'what to look at');
  const beside = page.getByRole('list', { name: 'Where to see: A car beside the track' });
  await beside.getByRole('link', { name: 'QWKR 160002' }).click();
  await heading(page, /never been read/).waitFor();
  expect(new URL(page.url()).pathname).toBe('/equipment/QWKR160002');
});

test('who may not open a car reads its number without a link', async () => {
  await seedDemo(db);
  await showRegister(db);
  portal().context.env.demo = true;
  const page = await open();
  await signIn(page, 'boxes@fishplate.example', world.password);
  await page.goto('/what-to-look-at');
  const beside = page.getByRole('list', { name: 'Where to see: A car beside the track' });
  await beside.getByText('QWKR 160002').waitFor();
  expect(await beside.getByRole('link').count()).toBe(0);
  await page.getByText('Cars without a link are not yours to open').waitFor();
  const trailers = page.getByRole('list', { name: 'Where to see: Trailers and boxes' });
  await trailers.getByRole('link', { name: 'ZQXU 305400 0' }).waitFor();
});
