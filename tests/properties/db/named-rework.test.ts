import { expect, it } from 'vitest';
import type { Configuration } from '../../../server/domain/movements/configuration.js';
import { historyOf } from '../../../server/domain/movements/history-of.js';
import { modelsOf } from '../../../server/models/index.js';
import { createProjector } from '../../../server/projections/projector.js';
import { putTag } from '../../../server/services/put-tag.js';
import { upsertAntennas } from '../../../server/services/upsert-antennas.js';
import { buildContext } from '../../support/context.js';
import { useTestDatabase } from '../../support/database.js';
import { disorderedCase } from '../../support/disordered-ledger.js';
import { dumpDatabase } from '../../support/dump-database.js';
import { dumpOf } from '../../support/dump-history.js';
import { expectSameHistory } from '../../support/expect-same-history.js';
import { projectWithKills } from '../../support/project-with-kills.js';
import { storeConfiguration } from '../../support/store-configuration.js';
import { tagOf, time, Trackside } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';
import { deliver, writeLedger } from '../../support/write-ledger.js';

const db = useTestDatabase();
const TIMEOUT_MS = 120_000;

async function fold(): Promise<void> {
  const projector = createProjector(buildContext(db));
  await projector.drain();
  await projector.stop();
}

/** The same network with the antennas of one read point at the other end of their track. */
function turnedAround(configuration: Configuration): Configuration {
  const offsets = (id: number) =>
    new Set(configuration.antennas.filter((a) => a.readPointId === id).map((a) => a.offsetM)).size;
  const point = configuration.readPoints.find(({ id }) => offsets(id) > 1);
  if (!point) throw new Error('no read point with several offsets');
  const antennas = configuration.antennas.map((antenna) =>
    antenna.readPointId === point.id ? { ...antenna, offsetM: -antenna.offsetM } : antenna,
  );
  return { ...configuration, antennas };
}

it.each([12, 13, 14])(
  'changed offset: what was folded under the old one is made anew while other reads come in (seed %i)',
  async (seed) => {
    const { configuration, ledger } = disorderedCase(seed, 1_500);
    const changed = turnedAround(configuration);
    const items = changed.antennas
      .filter((antenna, index) => antenna.offsetM !== configuration.antennas[index]?.offsetM)
      .map(({ siteId, readPointId, number, offsetM, side }) => ({
        ...{ number, offsetM, side },
        site: configuration.sites.find(({ id }) => id === siteId)?.code ?? '',
        readPoint: configuration.readPoints.find(({ id }) => id === readPointId)?.code ?? '',
      }));
    await storeConfiguration(db, configuration);
    const first = ledger.reads.filter((_read, index) => index % 3 > 0);
    await deliver(db, configuration, { reads: first, wheels: ledger.wheels });
    await fold();
    const before = await dumpDatabase(db, configuration);
    expectSameHistory(before, dumpOf({ reads: first, wheels: ledger.wheels }, configuration));

    await upsertAntennas(db, { items, isList: true }, null);
    const rest = ledger.reads.filter((_read, index) => index % 3 === 0);
    const writing = writeLedger(changed, { reads: rest, wheels: [] }, seed);
    await projectWithKills(db, writing, seed);
    const dump = await dumpDatabase(db, changed);
    expectSameHistory(dump, dumpOf(ledger, changed));
    expect(dump).not.toEqual(dumpOf(ledger, configuration));
    expect(await db.pool.query('SELECT DISTINCT state FROM rebuilds')).toEqual([{ state: 'done' }]);
  },
  TIMEOUT_MS,
);

it('a dated tag: put on another car at an instant, it takes the reads from then on along', async () => {
  const world = twoYards('offsets');
  const cars = ['QTKX1', 'QTKX2'];
  const worn = tagOf('QTKX3');
  const named = { validFrom: null, validTo: null };
  const configuration: Configuration = {
    ...world.configuration,
    units: cars.map((unit) => ({ unit, kind: 'car', registered: true })),
    identities: cars.map((unit) => ({ value: unit, unit, ...named })),
    tags: [],
  };
  await storeConfiguration(db, configuration);
  const unitId = async (unitKey: string) => {
    const unit = await modelsOf(db.sequelize).Unit.findOne({ where: { unitKey } });
    return unit?.id ?? 0;
  };
  const [firstId, secondId] = [await unitId('QTKX1'), await unitId('QTKX2')];
  const put = (id: number, clock: string, takeFrom: boolean) => {
    const input = { value: worn, side: null, validFrom: new Date(time(clock)), takeFrom };
    return putTag(db, id, input, new Date(time('3T00:00:00')), null);
  };
  await put(firstId, '00:00', false);
  const { ledger } = new Trackside(configuration)
    .cross(world.leadA, 'QTKX3', '10:00:00', 'increasing')
    .cross(world.line, 'QTKX3', '11:30:00', 'increasing')
    .cross(world.leadB, 'QTKX3', '14:00:00', 'increasing')
    .cross(world.leadB, 'QTKX2', '16:00:00', 'decreasing');
  await deliver(db, configuration, ledger);
  await fold();
  const wearing = (unit: string, from: string, to: string | null) => {
    return { value: worn, unit, validFrom: time(from), validTo: to === null ? null : time(to) };
  };
  const alone = { ...configuration, tags: [wearing('QTKX1', '00:00', null)] };
  expectSameHistory(await dumpDatabase(db, alone), dumpOf(ledger, alone));

  await put(secondId, '12:00', true);
  await fold();
  const both = {
    ...configuration,
    tags: [wearing('QTKX1', '00:00', '12:00'), wearing('QTKX2', '12:00', null)],
  };
  expectSameHistory(await dumpDatabase(db, both), dumpOf(ledger, both));
  const { units } = historyOf(ledger, both);
  expect(units.get('QTKX1')?.lastSeen).toMatchObject({ siteId: world.line.siteId });
  expect(units.get('QTKX2')?.stays).toMatchObject([
    { siteId: world.yardB, arrivedAt: time('14:00'), departedAt: time('16:00') },
  ]);
});
