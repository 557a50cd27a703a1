import { expect } from 'vitest';
import { aarIdentity } from '../../../server/domain/identifiers/identity.js';
import type { Database } from '../../../server/lib/database.js';
import type { Organisation } from '../../../server/models/organisation.js';
import type { Site } from '../../../server/models/site.js';
import { replaceReaderToken } from '../../../server/services/replace-reader-token.js';
import {
  buildAntenna,
  buildOrganisation,
  buildReadPoint,
  buildSite,
  buildUnit,
} from '../../support/factories.js';
import { carTag } from '../../support/ingest.js';
import type { Portal } from './portal.js';
import { soon } from './screens.js';

/** A yard with one lead, where a reader sees cars come in and go out. */
export interface Yard {
  site: Site;
  token: string;
}

const SECONDS_BETWEEN_CARS = 3;

/** Alder Bend Yard, where a car that left for certain is told after 4 h, and Cairn Junction (limit 48 h). */
export async function buildYards(
  db: Database,
  portal: Portal,
): Promise<{ alder: Yard; cairn: Yard }> {
  const alder = await buildSite(db, {
    code: 'ALDER',
    name: 'Alder Bend Yard',
    latitude: 45.1,
    longitude: -93.4,
    returnHours: 4,
    dwellLimitHours: 96,
  });
  const cairn = await buildSite(db, {
    code: 'CAIRN',
    name: 'Cairn Junction',
    latitude: 43.6,
    longitude: -91.2,
    returnHours: 4,
    dwellLimitHours: 48,
  });
  return {
    alder: await equip(db, portal, alder),
    cairn: await equip(db, portal, cairn),
  };
}

async function equip(db: Database, portal: Portal, site: Site): Promise<Yard> {
  const lead = await buildReadPoint(db, { site, code: 'LEAD', name: 'Lead' });
  await buildAntenna(db, { readPoint: lead, number: 1, offsetM: -3, side: 'left' });
  await buildAntenna(db, { readPoint: lead, number: 2, offsetM: 3, side: 'left' });
  await db.pool.query('UPDATE config_state SET version = version + 1 WHERE id = 1');
  return { site, token: await replaceReaderToken(portal.context, site.id) };
}

/** Registers cars `QTKX <number>`; they are their owner's to see once they have been read. */
export async function buildCars(
  db: Database,
  numbers: number[],
  owner?: Organisation,
): Promise<Organisation> {
  const holder = owner ?? (await buildOrganisation(db));
  for (const number of numbers) {
    await buildUnit(db, {
      identity: aarIdentity('QTKX', number),
      owner: holder,
      carType: 'tank car',
      tags: [{ value: carTag(number), side: 'left' }],
    });
  }
  return holder;
}

/**
 * Lets cars cross a yard's lead now, one after the other: their reads are sent to the server by
 * HTTP as a reader sends them, and are waited for until the server has taken them up.
 */
export async function cross(
  portal: Portal,
  yard: Yard,
  numbers: number[],
  way: 'in' | 'out',
): Promise<void> {
  const start = portal.clock.now().getTime();
  const reads = numbers.flatMap((number, place) =>
    (way === 'in' ? [1, 2] : [2, 1]).map((antenna, index) => ({
      antenna,
      tag: carTag(number),
      readAt: new Date(start + (place * SECONDS_BETWEEN_CARS + index) * 1_000).toISOString(),
    })),
  );
  portal.clock.advance(numbers.length * SECONDS_BETWEEN_CARS * 1_000);
  expect(await sendReads(portal, yard, reads)).toMatchObject({
    accepted: reads.length,
    problems: [],
  });
}

/** Sends reads as the yard's reader does, waits until they are taken up, and gives the door's answer. */
export async function sendReads(
  portal: Portal,
  { site, token }: Yard,
  reads: { antenna: number; tag: string; readAt: string }[],
): Promise<unknown> {
  const response = await fetch(`${portal.address}/api/ingest/reads`, {
    method: 'POST',
    headers: { authorization: `Bearer ${token}`, 'content-type': 'application/json' },
    body: JSON.stringify({ site: site.code, reads }),
  });
  const answer: unknown = await response.json();
  await soon(() => lagOf(portal)).toBe(0);
  return answer;
}

async function lagOf({ address }: Portal): Promise<number> {
  const response = await fetch(`${address}/api/health`);
  return ((await response.json()) as { projectorLagMs: number }).projectorLagMs;
}
