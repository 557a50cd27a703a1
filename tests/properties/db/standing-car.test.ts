import { expect, it } from 'vitest';
import { ingestReads } from '../../../server/ingest/ingest-reads.js';
import { createProjector } from '../../../server/projections/projector.js';
import { buildContext } from '../../support/context.js';
import { useTestDatabase } from '../../support/database.js';
import { dumpDatabase } from '../../support/dump-database.js';
import { dumpOf } from '../../support/dump-history.js';
import type { Equipped } from '../../support/network-builder.js';
import { storeConfiguration } from '../../support/store-configuration.js';
import { Trackside } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const db = useTestDatabase();
const STANDS = 'QTKX1';
const SECOND = 1_000;

/** As time goes by: a car in the beam from 10:00 to 12:00, and a train of four each half hour. */
function morning(equipped: Equipped) {
  const world = twoYards(equipped);
  const track = new Trackside(world.configuration);
  const clock = (minute: number, second = 0) =>
    new Date(Date.UTC(2026, 2, 2, 10, minute, second)).toISOString().slice(8, 23);
  for (let second = 0; second <= 120 * 60; second += 40) {
    track.read(world.leadA, 0, STANDS, clock(0, second));
  }
  for (const [train, minute] of [20, 50, 80, 110].entries()) {
    for (const car of [2, 3, 4, 5]) {
      const direction = train % 2 ? 'decreasing' : 'increasing';
      track.cross(world.leadA, `QTKX${car}`, clock(minute, car * 4), direction);
    }
  }
  // It goes on its way, over the other antenna where there is one.
  track.read(world.leadA, world.leadA.antennas.length - 2, STANDS, clock(120, 30));
  return { world, ledger: track.ledger };
}

it.each(['offsets', 'sensors'] as const)(
  'a car that stands in the beam is the same history while trains go by (%s)',
  async (equipped) => {
    const { world, ledger } = morning(equipped);
    await storeConfiguration(db, world.configuration);
    const projector = createProjector(buildContext(db));
    const inOrder = [...ledger.reads].sort((a, b) => a.at - b.at);
    const site = { id: world.yardA, code: 'QA' };
    for (let taken = 0; taken < inOrder.length; taken += 15) {
      const reads = inOrder.slice(taken, taken + 15).map(({ antenna, tag, at }) => {
        return { antenna, tag, readAt: new Date(at).toISOString() };
      });
      const last = inOrder[Math.min(taken + 14, inOrder.length - 1)]?.at ?? 0;
      await ingestReads(db, { site, reads, receivedAt: new Date(last + SECOND) });
      await projector.drain();
      const known = { reads: inOrder.slice(0, taken + 15), wheels: [] };
      expect(await dumpDatabase(db, world.configuration), `after ${taken + 15} reads`).toEqual(
        dumpOf(known, world.configuration),
      );
    }
    await projector.stop();
  },
  60_000,
);
