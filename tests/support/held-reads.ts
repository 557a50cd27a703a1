import type { Express } from 'express';
import { expect } from 'vitest';
import type { Database } from '../../server/lib/database.js';
import { buildSite } from './factories.js';
import { buildReader, carTag, postReads } from './ingest.js';
import type { TestClock } from './context.js';

/** A reader at a site of this code and name. */
export const readerAt = async (db: Database, code: string, name = code) =>
  buildReader(db, { site: await buildSite(db, { code, name }) });

/** Sends reads of cars from `first` on, an hour ahead, a second apart, which are all set aside. */
export async function sendAhead(
  { app, clock }: { app: Express; clock: TestClock },
  token: string,
  count: number,
  first = 1,
): Promise<void> {
  const anHourAhead = clock.now().getTime() + 3_600_000;
  const reads = Array.from({ length: count }, (_, index) => ({
    antenna: 1,
    tag: carTag(first + index),
    readAt: new Date(anHourAhead + (first + index) * 1_000).toISOString(),
  }));
  const { body } = await postReads(app, token, { reads }).expect(200);
  expect(body).toMatchObject({ accepted: 0, held: count });
}

/** What stands of a release. */
export interface Standing {
  released: number;
  held: number;
  /** Reads in the queue to be taken up again, by portion. */
  portions: string[][];
}

/** Counts what stands, with each read as `batch-seq`. */
export async function standing(db: Database): Promise<Standing> {
  const count = async (table: string) => {
    const [row] = await db.pool.query<{ n: number }[]>(`SELECT COUNT(*) AS n FROM ${table}`);
    return row?.n ?? 0;
  };
  const work = await db.pool.query<{ payload: string; read_count: number; lane: number }[]>(
    "SELECT payload, read_count, lane FROM work WHERE kind = 'released' ORDER BY id",
  );
  const portions = work.map(({ payload, read_count, lane }) => {
    const { reads } = JSON.parse(payload) as { reads: [number, number, string][] };
    expect({ lane, reads: reads.length }).toEqual({ lane: 1, reads: read_count });
    return reads.map(([batch, seq]) => `${batch}-${seq}`);
  });
  return { released: await count('releases'), held: await count('held'), portions };
}

/** Every released read waits in one portion of 500 at most. */
export function expectWhole({ released, portions }: Standing): void {
  const reads = portions.flat();
  expect(new Set(reads).size).toBe(reads.length);
  expect(reads.length).toBe(released);
  expect(Math.max(...portions.map((portion) => portion.length))).toBeLessThanOrEqual(500);
}
