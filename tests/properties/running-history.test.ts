import { expect, it } from 'vitest';
import { canonicalDump } from '../../server/domain/movements/canonical-dump.js';
import { Network } from '../../server/domain/movements/configuration.js';
import type { History } from '../../server/domain/movements/history-of.js';
import { disorderedCase } from '../support/disordered-ledger.js';
import { dumpOf, rowsOf } from '../support/dump-history.js';
import { RunningHistory } from '../support/running-history.js';
import { SeededRandom } from '../support/seeded-random.js';

const CASES = import.meta.env.TEST_MODE === 'long' ? 2_000 : 200;
const READS = 300;
const FIRST_SEED = 20_260_301;

const TIMEOUT_MS = CASES * 1_000;

it(
  `comes to the same whatever way ${CASES} ledgers of ${READS} reads and more come in`,
  () => {
    for (let seed = FIRST_SEED; seed < FIRST_SEED + CASES; seed += 1) {
      const { configuration, ledger } = disorderedCase(seed, READS, { reported: true });
      const random = new SeededRandom(seed);
      const running = new RunningHistory(configuration);
      // Half of the cases nearly in order with stragglers, half in no order at all.
      const late = () => (random.chance(seed % 2 ? 1 : 0.05) ? random.between(0, 1e9) : 0);
      const facts = [
        ...ledger.reads.map((read) => ({ read, at: read.at + late() })),
        ...ledger.wheels.map((wheel) => ({ wheel, at: wheel.endedAt + late() })),
        ...(ledger.reports ?? []).map((report) => ({ report, at: report.at + late() })),
      ].sort((a, b) => a.at - b.at);
      while (facts.length) {
        const portion = facts.splice(0, random.whole(1, 60));
        running.take({
          reads: portion.flatMap((fact) => ('read' in fact ? [fact.read] : [])),
          wheels: portion.flatMap((fact) => ('wheel' in fact ? [fact.wheel] : [])),
          reports: portion.flatMap((fact) => ('report' in fact ? [fact.report] : [])),
        });
      }
      expect(dump(running.history), `seed ${seed}`).toEqual(dumpOf(ledger, configuration));

      function dump(history: History): string[] {
        return canonicalDump(new Network(configuration), rowsOf(history), String);
      }
    }
  },
  TIMEOUT_MS,
);
