import { setTimeout as pause } from 'node:timers/promises';
import { z } from 'zod';
import { parseUnit } from './domain/identifiers/parse-unit.js';
import { Problem } from './errors.js';
import { systemClock } from './lib/clock.js';
import { openDatabase, type Database } from './lib/database.js';
import { LiveEvents } from './lib/live-events.js';
import { createLogger } from './lib/logger.js';
import { createProjector, type Portion } from './projections/projector.js';
import { siteIdsByCode } from './queries/ids-by-code.js';
import { findRebuild, findStoppedCommand } from './queries/list-rebuilds.js';
import { unitsByIdentity } from './queries/unit-names.js';
import { planCommandRebuild, type RebuildSelection } from './services/plan-command-rebuild.js';
import { resumeRebuild, stopRebuild } from './services/stop-rebuild.js';

/** What was asked for cannot be done; the message says so in words for a person. */
export class Refused extends Error {
  override name = 'Refused';
}

/** As they were typed. */
export interface RebuildOptions {
  all?: boolean;
  resume?: boolean;
  site?: string;
  car?: string;
  from?: string;
  until?: string;
}

export interface RebuildOutcome {
  state: 'done' | 'stopped' | 'nothing';
  readPoints: number;
}

/** How far it has come: hours of the ledger, of each read point for itself. */
export type ShowProgress = (progress: { done: number; total: number; unit: string }) => void;

const LOOK_EVERY_MS = 250;

/**
 * Makes history anew from the reads, as far as was asked for, and shows how far it has come. The
 * work is the projector's: this process does it where no server is at it, and else looks on. When
 * the signal comes it is stopped after the part in hand.
 */
export async function rebuild(
  databaseUrl: string,
  options: RebuildOptions,
  { show, signal }: { show: ShowProgress; signal: AbortSignal },
): Promise<RebuildOutcome> {
  const db = openDatabase(databaseUrl);
  try {
    const id = options.resume ? await resume(db) : await plan(db, options);
    if (id === null) return { state: 'nothing', readPoints: 0 };
    return await followRebuild(db, id, { show, signal });
  } finally {
    await db.close();
  }
}

async function resume(db: Database): Promise<number> {
  const id = await findStoppedCommand(db);
  if (id === null) throw new Refused('Nothing that this command began stands stopped.');
  await resumeRebuild(db, id);
  return id;
}

async function plan(db: Database, options: RebuildOptions): Promise<number | null> {
  return planCommandRebuild(db, await readSelection(db, options));
}

async function readSelection(db: Database, options: RebuildOptions): Promise<RebuildSelection> {
  const { all = false, site, car } = options;
  const parts = [site, car, options.from, options.until].filter((part) => part !== undefined);
  if (all === parts.length > 0) {
    throw new Refused('Say either --all, or --site, --car, or --from and --until.');
  }
  if (site !== undefined && car !== undefined) throw new Refused('Say --site or --car, not both.');
  const [from, until] = [instantOf('--from', options.from), instantOf('--until', options.until)];
  if (from && until && from >= until) throw new Refused('--from must lie before --until.');
  const span = [from && `from ${from.toISOString()}`, until && `until ${until.toISOString()}`];
  const what = all ? 'All history' : ([site, car].find((part) => part) ?? 'History');
  return {
    label: [`${what} by command`, ...span].filter(Boolean).join(' '),
    siteId: site === undefined ? null : await siteOf(db, site),
    unitId: car === undefined ? null : await unitOf(db, car),
    from,
    until,
  };
}

const dateOrInstant = z.union([z.iso.date(), z.iso.datetime({ offset: true })]);

function instantOf(name: string, text: string | undefined): Date | null {
  if (text === undefined) return null;
  if (dateOrInstant.safeParse(text).success) return new Date(text);
  throw new Refused(`${name} must be a day (2026-03-04, UTC) or a time with its offset.`);
}

async function siteOf(db: Database, code: string): Promise<number> {
  const id = (await siteIdsByCode(db, [code])).get(code);
  if (id === undefined) throw new Refused(`${code} is not the code of a site.`);
  return id;
}

async function unitOf(db: Database, text: string): Promise<number> {
  const parsed = parseUnit(text);
  if (parsed.kind !== 'unit') throw new Refused(`${text} is no mark and number.`);
  const { compact, display } = parsed.identity;
  const id = (await unitsByIdentity(db, [compact], systemClock.now())).get(compact);
  if (id === undefined) throw new Refused(`${display} is neither registered nor was it ever read.`);
  return id;
}

async function followRebuild(
  db: Database,
  id: number,
  { show, signal }: { show: ShowProgress; signal: AbortSignal },
): Promise<RebuildOutcome> {
  const projector = createProjector({
    db,
    logger: createLogger('silent'),
    liveEvents: new LiveEvents(),
    clock: systemClock,
  });
  let lookedAt = -Infinity;
  try {
    for (;;) {
      if (signal.aborted) await stopUnlessDone(db, id);
      const idle = signal.aborted || isIdle(await projector.runOnce());
      if (!idle && performance.now() - lookedAt < LOOK_EVERY_MS) continue;
      lookedAt = performance.now();
      const outcome = await look(db, id, show);
      if (outcome) return outcome;
      if (idle) await pause(LOOK_EVERY_MS);
    }
  } finally {
    await projector.stop();
  }
}

const isIdle = ({ reads, units, slices }: Portion) => !reads && !units && !slices;

async function stopUnlessDone(db: Database, id: number): Promise<void> {
  try {
    await stopRebuild(db, id);
  } catch (error) {
    if (!(error instanceof Problem && error.status === 409)) throw error;
  }
}

/** Shows how far it has come; answers once nothing more will happen. */
async function look(db: Database, id: number, show: ShowProgress): Promise<RebuildOutcome | null> {
  const found = await findRebuild(db, id);
  if (!found) throw new Refused('The rebuild is gone.');
  const { rebuild: row, progress } = found;
  const total = progress?.hours ?? 0;
  show({ done: (progress?.share ?? 1) * total, total: Math.round(total), unit: 'hours of reads' });
  const readPoints = progress?.readPoints ?? 0;
  if (row.state === 'stopped') return { state: 'stopped', readPoints };
  const isDone = row.state === 'done' && !(await hasLateUnits(db));
  return isDone ? { state: 'done', readPoints } : null;
}

/** Units that are to be folded again because of what was made anew. */
async function hasLateUnits(db: Database): Promise<boolean> {
  const rows = await db.pool.query<unknown[]>('SELECT 1 FROM dirty_units WHERE lane = 1 LIMIT 1');
  return rows.length > 0;
}
