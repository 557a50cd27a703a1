import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { ingestAnswer, type IngestAnswer } from '../../server/contract/ingest.js';
import { buildClock } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { expectProblem, useDoor } from '../support/use-door.js';
import { keyOf, wireReads, type WireRead } from '../support/wire-reads.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00.000Z');
const limits = { requestsPerSecond: 1e6, readsPerSecond: 1e9 };
const door = useDoor(db, { clock, limits });
const isLong = import.meta.env.TEST_MODE === 'long';
const runs = {
  seed: isLong ? undefined : 20_261_201,
  numRuns: isLong ? 3_000 : 150,
  endOnFailure: true,
};
const timeout = isLong ? 1_800_000 : 60_000;

type Form = 'application/json' | 'application/x-ndjson';
const forms = fc.constantFrom<Form>('application/json', 'application/x-ndjson');
const lists = fc.array(wireReads(clock.now()), { maxLength: 25 });
const lineEnds = fc.constantFrom('\n', '\r\n', '\n\n', '\n \t\n');

function bodyOf(reads: WireRead[], form: Form, lineEnd: string): string {
  const texts = reads.map(({ text }) => text);
  return form === 'application/json' ? `{"reads":[${texts.join()}]}` : texts.join(lineEnd);
}

/** Keys of the rows of the ledger after this batch, and the highest batch. */
async function storedAfter(batchId: number) {
  const rows = await db.pool.query<
    { batch_id: number; antenna_no: number; tag: Buffer; read_at: Date }[]
  >('SELECT batch_id, antenna_no, tag, read_at FROM `reads` WHERE batch_id > ?', [batchId]);
  return {
    keys: rows.map((row) => keyOf(row.antenna_no, row.tag.toString(), row.read_at.getTime())),
    last: rows.reduce((highest, row) => Math.max(highest, row.batch_id), batchId),
  };
}

/** The answer of the interface; fails unless it is one, and its counts add up. */
function soundAnswer(body: unknown, total?: number): IngestAnswer {
  const answer = ingestAnswer.strict().parse(body);
  const { accepted, duplicates, held, rejected, problems } = answer;
  expect(problems).toHaveLength(held + rejected);
  if (total !== undefined) expect(accepted + duplicates + held + rejected).toBe(total);
  return answer;
}

describe('any body', () => {
  test(
    'of reads in whatever form: each is answered, the well-formed are all stored, whole and once',
    async () => {
      const known = new Set<string>();
      let last = 0;
      await fc.assert(
        fc.asyncProperty(lists, forms, lineEnds, async (reads, form, lineEnd) => {
          const { status, body } = await door.send(bodyOf(reads, form, lineEnd), form);
          expect({ status, body: body as object }).toMatchObject({ status: 200 });
          const answer = soundAnswer(body, reads.length);
          const rejected = reads.flatMap(({ reject }, index) => (reject ? [[index, reject]] : []));
          const refused = answer.problems.filter(({ index }) => reads[index]?.reject);
          expect(refused.map(({ index, code }) => [index, code])).toEqual(rejected);
          expect(answer.rejected).toBe(rejected.length);
          const fresh = new Set(reads.flatMap(({ key }) => (key ? [key] : [])));
          for (const key of known) fresh.delete(key);
          const stored = await storedAfter(last);
          expect(stored.keys.toSorted()).toEqual([...fresh].toSorted());
          expect(answer.accepted + answer.held).toBe(fresh.size);
          for (const key of fresh) known.add(key);
          last = stored.last;
        }),
        runs,
      );
      expect((await storedAfter(0)).keys).toHaveLength(known.size);
      expect(known.size).toBeGreaterThan(runs.numRuns);
    },
    timeout,
  );

  test(
    'that was damaged on its way: a problem, or an answer that is true of what is stored',
    async () => {
      let last = 0;
      const statuses = new Map<number, number>();
      await fc.assert(
        fc.asyncProperty(lists, forms, damages, async (reads, form, damage) => {
          const sent = damaged(Buffer.from(bodyOf(reads, form, '\n')), damage);
          const answer = await door.send(sent, form);
          statuses.set(answer.status, (statuses.get(answer.status) ?? 0) + 1);
          const stored = await storedAfter(last);
          last = stored.last;
          if (answer.status === 200) {
            const { accepted, held } = soundAnswer(answer.body);
            expect(stored.keys).toHaveLength(accepted + held);
          } else {
            expect([400, 413]).toContain(answer.status);
            expectProblem(answer, answer.status);
            expect(stored.keys).toEqual([]);
          }
        }),
        runs,
      );
      expect([...statuses.keys()].toSorted()).toEqual([200, 400]);
    },
    timeout,
  );

  test(
    'of bytes that mean nothing: a problem, or an answer about no reads',
    async () => {
      await fc.assert(
        fc.asyncProperty(noise, forms, async (bytes, form) => {
          const answer = await door.send(bytes, form);
          if (answer.status === 200)
            expect(soundAnswer(answer.body)).toMatchObject({ accepted: 0 });
          else expectProblem(answer, 400);
        }),
        runs,
      );
      expect((await storedAfter(0)).keys).toEqual([]);
    },
    timeout,
  );
});

const noise = fc.oneof(
  fc.uint8Array({ minLength: 1, maxLength: 200 }).map((array) => Buffer.from(array)),
  fc.string({ unit: fc.constantFrom(...'{}[]",:\\ \n"reads1e9'), maxLength: 60 }).map(Buffer.from),
  fc.json().map((text) => Buffer.from(text)),
);

interface Damage {
  kind: 'cut' | 'flip' | 'drop' | 'insert' | 'repeat';
  /** Places as shares of the body. */
  from: number;
  to: number;
  byte: number;
}

const share = fc.double({ min: 0, max: 1, noNaN: true });
const damages: fc.Arbitrary<Damage[]> = fc.array(
  fc.record({
    kind: fc.constantFrom<Damage['kind']>('cut', 'flip', 'drop', 'insert', 'repeat'),
    from: share,
    to: share,
    byte: fc.oneof(fc.nat(255), fc.constantFrom(...Buffer.from('{}[]",:\\\n0'))),
  }),
  { minLength: 1, maxLength: 3 },
);

function damaged(body: Buffer, damage: Damage[]): Buffer {
  return damage.reduce((bytes, { kind, from, to, byte }) => {
    const at = Math.floor(from * bytes.length);
    const end = Math.min(bytes.length, at + Math.floor(to * 40));
    const [before, after] = [bytes.subarray(0, at), bytes.subarray(at)];
    switch (kind) {
      case 'cut':
        return before;
      case 'flip':
        return Buffer.concat([before, Buffer.from([byte]), after.subarray(1)]);
      case 'drop':
        return Buffer.concat([before, bytes.subarray(end)]);
      case 'insert':
        return Buffer.concat([before, Buffer.from([byte]), after]);
      case 'repeat':
        return Buffer.concat([bytes.subarray(0, end), after]);
    }
  }, body);
}
