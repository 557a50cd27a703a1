import { expect, it } from 'vitest';
import { useTestDatabase } from '../../support/database.js';
import { disorderedCase } from '../../support/disordered-ledger.js';
import { dumpDatabase } from '../../support/dump-database.js';
import { dumpOf } from '../../support/dump-history.js';
import { expectSameHistory } from '../../support/expect-same-history.js';
import { projectWithKills } from '../../support/project-with-kills.js';
import { storeConfiguration } from '../../support/store-configuration.js';
import { writeLedger } from '../../support/write-ledger.js';

const db = useTestDatabase();
const CASES = import.meta.env.TEST_MODE === 'long' ? 120 : 12;
const FIRST_SEED = 71;
const READS = 5_000;
/** The generator counts repeats of a read, of which a ledger keeps one. */
const DRAWN = 5_600;
const TIMEOUT_MS = 180_000;

it.each(Array.from({ length: CASES }, (_, index) => FIRST_SEED + index))(
  'equals history from the whole ledger: eight writers, disorder, repeats, projectors cut off (seed %i)',
  async (seed) => {
    const { configuration, ledger } = disorderedCase(seed, DRAWN, { reported: true });
    expect(ledger.reads.length).toBeGreaterThanOrEqual(READS);
    await storeConfiguration(db, configuration);
    const killed = await projectWithKills(db, writeLedger(configuration, ledger, seed), seed);
    const dump = await dumpDatabase(db, configuration);
    expectSameHistory(dump, dumpOf(ledger, configuration));
    expect(dump.length).toBeGreaterThan(READS / 10);
    expect(killed).toBeGreaterThanOrEqual(2);
  },
  TIMEOUT_MS,
);
