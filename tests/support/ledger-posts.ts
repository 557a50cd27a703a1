import { createHash, randomBytes } from 'node:crypto';
import type { Configuration } from '../../server/domain/movements/configuration.js';
import type { Ledger } from '../../server/domain/movements/history-of.js';
import type { Database } from '../../server/lib/database.js';
import { modelsOf } from '../../server/models/index.js';
import type { SeededRandom } from './seeded-random.js';

const MOST_READS = 25;
const SENT_TWICE = 0.1;

/** One request of a reader. */
export interface Post {
  path: '/api/ingest/reads' | '/api/ingest/wheels';
  siteId: number;
  body: object;
}

/** The same ledger, its last read two seconds ago: nothing in it is ahead of the clock or too old. */
export function untilNow(ledger: Ledger): Ledger {
  const by = Date.now() - 2_000 - Math.max(...ledger.reads.map((read) => read.at));
  return {
    ...ledger,
    reads: ledger.reads.map((read) => ({ ...read, at: read.at + by })),
    wheels: ledger.wheels.map((record) => ({
      ...record,
      startedAt: record.startedAt + by,
      endedAt: record.endedAt + by,
    })),
  };
}

/** The ledger as requests of one site each, shuffled; a tenth of them come twice. */
export function postsOf(
  ledger: Ledger,
  { sites, readPoints }: Configuration,
  random: SeededRandom,
): Post[] {
  const codeOf = (siteId: number) => sites.find((site) => site.id === siteId)?.code as string;
  const posts = ledger.wheels.map(({ readPointId, startedAt, endedAt, ...rest }): Post => {
    const point = readPoints.find(({ id }) => id === readPointId);
    if (!point) throw new Error(`no read point ${readPointId}`);
    const { axles, direction, speedKmh } = rest;
    const body = {
      site: codeOf(point.siteId),
      readPoint: point.code,
      startedAt: new Date(startedAt).toISOString(),
      endedAt: new Date(endedAt).toISOString(),
      axles,
      ...(direction ? { direction } : {}),
      ...(speedKmh === null ? {} : { speedKmh }),
    };
    return { path: '/api/ingest/wheels', siteId: point.siteId, body };
  });
  for (const siteId of new Set(ledger.reads.map((read) => read.siteId))) {
    const rest = random.shuffled(ledger.reads.filter((read) => read.siteId === siteId));
    while (rest.length) {
      const reads = rest.splice(0, random.whole(1, MOST_READS)).map(({ antenna, tag, at }) => {
        return { antenna, tag, readAt: new Date(at).toISOString() };
      });
      posts.push({ path: '/api/ingest/reads', siteId, body: { site: codeOf(siteId), reads } });
    }
  }
  return random.shuffled([...posts, ...posts.filter(() => random.chance(SENT_TWICE))]);
}

/** Gives each site a reader token; answers them by site. */
export async function tokensOf(
  db: Database,
  { sites }: Pick<Configuration, 'sites'>,
): Promise<Map<number, string>> {
  const tokens = new Map<number, string>();
  for (const { id } of sites) {
    const token = randomBytes(32).toString('base64url');
    const tokenHash = createHash('sha256').update(token).digest();
    const createdAt = new Date();
    const { ReaderToken } = modelsOf(db.sequelize);
    await ReaderToken.create({ siteId: id, tokenHash, createdAt, revokedAt: null });
    tokens.set(id, token);
  }
  return tokens;
}
