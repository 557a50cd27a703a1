import type { Page } from 'playwright-core';
import { expect, test } from 'vitest';
import type { Site } from '../../server/models/site.js';
import { planRebuild } from '../../server/services/plan-rebuild.js';
import { buildPerson, buildReadPoint, PASSWORD } from '../support/factories.js';
import { expectAccessible } from './support/expect-accessible.js';
import { buildCars, buildYards, cross } from './support/railway.js';
import { heading, signIn } from './support/screens.js';
import { usePortal } from './support/use-portal.js';

const { db, portal, open } = usePortal();
const ahead = (hours: number) => new Date(portal().clock.now().getTime() + hours * 3_600_000);

/** Another server is at the queue and does nothing, so that what waits goes on waiting. */
async function holdUp(): Promise<void> {
  await db.pool.query(
    `INSERT INTO worker_leases (name, holder, epoch, expires_at)
     VALUES ('projector', 'another', 1, NOW(3) + INTERVAL 1 HOUR)
     ON DUPLICATE KEY UPDATE holder = 'another', epoch = epoch + 1,
       expires_at = VALUES(expires_at)`,
  );
}

const letGo = () => db.pool.query("DELETE FROM worker_leases WHERE name = 'projector'");

async function plan(site: Site, label: string, requestedBy: number | null): Promise<number> {
  const { id: readPointId } = await buildReadPoint(db, { site });
  const spans = [{ readPointId, since: ahead(-48), until: ahead(-8) }];
  const cause = requestedBy === null ? 'command' : 'configuration';
  return (await planRebuild(db.pool, { cause, label, requestedBy, spans })) as number;
}

async function rework(): Promise<Page> {
  const page = await open();
  const administrator = await buildPerson(db, { name: 'Ada Quill' });
  await signIn(page, administrator.email, PASSWORD);
  await page.getByRole('link', { name: 'Rework' }).first().click();
  return page;
}

test('I see what an antenna that was moved sets off, stop it, and let it go on', async () => {
  const { alder } = await buildYards(db, portal());
  await buildCars(db, [1]);
  await cross(portal(), alder, [1], 'in');
  const page = await rework();
  await heading(page, /^Nothing of history is being made anew\.$/).waitFor();
  await page.getByText('Nothing has had to be made anew yet.').waitFor();
  await holdUp();
  const moved = { site: 'ALDER', readPoint: 'LEAD', number: 2, offsetM: -9, side: 'left' };
  const sent = await page.request.post('/api/antennas', { data: moved });
  expect(sent.status()).toBe(200);
  await page.reload();
  await heading(page, /^1 rework waits\.$/).waitFor();
  const row = page.getByRole('row', { name: /Antenna 2 at ALDER moved to −9 m/ });
  expect(await row.getByRole('progressbar').getAttribute('value')).toBe('0');
  await row.getByText('by Ada Quill').waitFor();
  await row.getByRole('button', { name: /^Stop/ }).click();
  await heading(page, /^1 rework is stopped\.$/).waitFor();
  await page.getByText('leaves a part of history as it was before the change').waitFor();
  await letGo();
  await row.getByRole('button', { name: /^Go on/ }).click();
  await heading(page, /^Nothing of history is being made anew\.$/).waitFor();
  await row.getByText('done', { exact: true }).waitFor();
  await page.goto('/equipment/QTKX1');
  await heading(page, /Alder Bend Yard/).waitFor();
});

test('Rework can be used by everyone', async () => {
  await holdUpWithSome();
  const page = await rework();
  await heading(page, /^1 rework is under way, 1 waits and 1 is stopped\.$/).waitFor();
  await expectAccessible(page, 'Rework');
});

test('it is for administrators', async () => {
  const clerk = await buildPerson(db, { roles: ['dispatcher'] });
  const page = await open();
  await signIn(page, clerk.email, PASSWORD);
  expect(await page.getByRole('link', { name: 'Rework' }).count()).toBe(0);
  await page.goto('/rework');
  await page.getByText('This is for administrators.').waitFor();
});

/** One in each state, the projector held up. */
async function holdUpWithSome(): Promise<void> {
  const { site } = (await buildYards(db, portal())).alder;
  await holdUp();
  const person = await buildPerson(db, { name: 'Wes Tallgren' });
  const [done, stopped, running] = [
    await plan(site, 'Tag put on QTKX 40402', person.id),
    await plan(site, 'Return hours of ALDER set to 8', person.id),
    await plan(site, 'Antenna 3 at ALDER moved to +6 m, and 2 more', person.id),
  ];
  await plan(site, 'All history by command', null);
  const set = (id: number, state: string, hours: number | null) =>
    db.pool.query('UPDATE rebuilds SET state = ?, finished_at = ? WHERE id = ?', [
      state,
      hours === null ? null : ahead(hours),
      id,
    ]);
  await set(done, 'done', -1);
  await set(stopped, 'stopped', null);
  await set(running, 'running', null);
  await db.pool.query('UPDATE rebuild_spans SET next_at = ?, done = 0 WHERE rebuild_id IN (?, ?)', [
    ahead(-33),
    stopped,
    running,
  ]);
}
