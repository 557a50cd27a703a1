import { expect, it } from 'vitest';
import type { Ledger } from '../../../server/domain/movements/history-of.js';
import { releaseHeldReads } from '../../../server/services/release-held-reads.js';
import { buildContext } from '../../support/context.js';
import { useTestDatabase } from '../../support/database.js';
import { disorderedCase } from '../../support/disordered-ledger.js';
import { dumpDatabase } from '../../support/dump-database.js';
import { dumpOf } from '../../support/dump-history.js';
import { expectSameHistory } from '../../support/expect-same-history.js';
import { buildPerson } from '../../support/factories.js';
import { projectWithKills } from '../../support/project-with-kills.js';
import { SeededRandom } from '../../support/seeded-random.js';
import { storeConfiguration } from '../../support/store-configuration.js';
import { deliver, writeLedger } from '../../support/write-ledger.js';

const db = useTestDatabase();
const CASES = import.meta.env.TEST_MODE === 'long' ? 20 : 2;
const FIRST_SEED = 911;
const READS = 2_000;
const AHEAD = 0.4;
const TIMEOUT_MS = 120_000;

/** A ledger of which some reads came in long before their time. */
function caseOf(seed: number) {
  const { configuration, ledger } = disorderedCase(seed, READS);
  const random = new SeededRandom(seed);
  const drawn = ledger.reads.map((read) => ({ read, isAhead: random.chance(AHEAD) }));
  const ahead = drawn.filter(({ isAhead }) => isAhead).map(({ read }) => read);
  const rest = drawn.filter(({ isAhead }) => !isAhead).map(({ read }) => read);
  const times = ahead.map(({ at }) => at).sort((a, b) => a - b);
  const middle = times[Math.floor(times.length / 2)] ?? 0;
  return { configuration, ledger, ahead, rest, first: times[0] ?? 0, middle };
}

it.each(Array.from({ length: CASES }, (_, index) => FIRST_SEED + index))(
  'released reads are history from then on, whoever releases them and whatever happens meanwhile (seed %i)',
  async (seed) => {
    const { configuration, ledger, ahead, rest, first, middle } = caseOf(seed);
    await storeConfiguration(db, configuration);
    const context = buildContext(db);
    const { id: personId } = await buildPerson(db);
    const release = (until?: Date) => releaseHeldReads(context, { personId }, { until });
    const before = new Date(first - 3_600_000);
    await deliver(db, configuration, { reads: ahead, wheels: [] }, before);

    const released = async () => {
      const counts = await Promise.all([release(new Date(middle)), release(new Date(middle))]);
      return counts.reduce((sum, count) => sum + count, 0);
    };
    const due = ahead.filter(({ at }) => at <= middle);
    const writing = Promise.all([
      writeLedger(configuration, { reads: rest, wheels: ledger.wheels }, seed),
      released(),
    ]);
    const killed = await projectWithKills(db, writing, seed);
    expect(killed).toBeGreaterThanOrEqual(2);
    expect((await writing)[1]).toBe(due.length);
    const half: Ledger = {
      reads: [
        ...rest,
        ...ahead.map((read) => ({ ...read, holdCode: read.at <= middle ? null : 'clock-ahead' })),
      ],
      wheels: ledger.wheels,
    };
    expectSameHistory(await dumpDatabase(db, configuration), dumpOf(half, configuration));

    const others = release();
    await projectWithKills(db, others, seed + 1);
    expect(await others).toBe(ahead.length - due.length);
    const dump = await dumpDatabase(db, configuration);
    expectSameHistory(dump, dumpOf(ledger, configuration));
    expect(dump.length).toBeGreaterThan(READS / 10);
  },
  TIMEOUT_MS,
);
