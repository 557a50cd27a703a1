import { once } from 'node:events';
import { createServer } from 'node:http';
import { createApp, type AppParts } from './app.js';
import { mailboxDirectory, readEnv, type Env } from './config/env.js';
import { startJobs } from './jobs/schedule.js';
import { systemClock } from './lib/clock.js';
import type { Context } from './lib/context.js';
import { openDatabase } from './lib/database.js';
import { LiveEvents } from './lib/live-events.js';
import { createLogger } from './lib/logger.js';
import { createProjector, type Projector } from './projections/projector.js';
import type { SeedProgress } from './simulator/seed-traffic.js';

/** What the start script is told; `ready` once requests are answered. */
type Message = { ready: true } | { progress: SeedProgress };

/** What the demo slept through beyond this is seeded before anything answers. */
const CLOSE_ENOUGH_MS = 20_000;

const logger = createLogger();
const stops: (() => Promise<unknown> | void)[] = [];
let stopping = false;

process.on('SIGTERM', () => void stop('SIGTERM', 0));
process.on('SIGINT', () => void stop('SIGINT', 0));
// The channel to the start script closes when that one ends, however it ends.
process.on('disconnect', () => void stop('the start script has gone', 0));
process.on('uncaughtException', (error) => void fail(error));
process.on('unhandledRejection', (error) => void fail(error));

await start(readEnv()).catch(fail);

/** Nothing listens before the demo is seeded and what waits is taken up. */
async function start(settings: Env): Promise<void> {
  const env = settings.demo && !settings.smtpUrl ? await keepMail(settings) : settings;
  const db = openDatabase(env.databaseUrl);
  stops.push(() => db.close());
  const context: Context = { env, db, clock: systemClock, logger, liveEvents: new LiveEvents() };
  const seededUntil = env.demo ? await seed(context) : null;
  const projector = createProjector(context);
  await takeUp(context, projector);
  projector.start();
  stops.push(() => projector.stop());
  await listen(context, {
    projectorLagMs: () => projector.lagMs(),
    ...(env.demo ? await import('./simulator/demo-cases.js') : {}),
  });
  const jobs = startJobs(context);
  stops.push(() => jobs.stop());
  if (seededUntil) await simulate(context, seededUntil);
  tell({ ready: true });
}

/**
 * Folds what has waited since before this start, and no more: another server may be at it, or keep
 * the queue from ever being empty. A failure is left to the projector, which tries again; readers
 * come first.
 */
async function takeUp({ clock }: Context, projector: Projector): Promise<void> {
  const begun = clock.now().getTime();
  try {
    for (;;) {
      const { reads, units } = await projector.runOnce();
      const isOld = (await projector.lagMs()) > clock.now().getTime() - begun;
      if ((reads === 0 && units === 0) || !isOld) return;
    }
  } catch (error) {
    logger.error({ err: error }, 'what waits could not be taken up yet');
  }
}

async function listen(context: Context, parts: AppParts): Promise<void> {
  const { port, host } = context.env;
  const server = createServer(createApp(context, parts));
  server.listen(port, host);
  await once(server, 'listening');
  logger.info({ port, host }, 'listening');
  stops.push(async () => {
    const closed = once(server, 'close');
    server.close();
    server.closeIdleConnections();
    // Event streams never end by themselves.
    setTimeout(() => server.closeAllConnections(), 1_000).unref();
    await closed;
  });
}

/** A mail server on loopback that keeps what the demo sends. */
async function keepMail(env: Env): Promise<Env> {
  const { startSmtpFake } = await import('./smtp-fake/start-smtp-fake.js');
  const fake = await startSmtpFake({ port: 0, directory: mailboxDirectory(env) });
  stops.push(() => fake.close());
  return { ...env, smtpUrl: fake.url };
}

/**
 * Lets the demo's register be seen, and gives it the traffic it slept through. Answers up to when:
 * seeding takes a while, and what goes by meanwhile is seeded again and then sent live.
 */
async function seed(context: Context): Promise<Date> {
  const { showRegister } = await import('./simulator/show-register.js');
  const { seedTraffic } = await import('./simulator/seed-traffic.js');
  await showRegister(context.db);
  for (;;) {
    const until = context.clock.now();
    await seedTraffic(context, { until, onProgress: (progress) => tell({ progress }) });
    if (context.clock.now().getTime() - until.getTime() < CLOSE_ENOUGH_MS) return until;
  }
}

async function simulate(context: Context, from: Date): Promise<void> {
  const { demoCredentials } = await import('./simulator/demo-credentials.js');
  const { startSimulator } = await import('./simulator/start-simulator.js');
  const simulator = startSimulator({
    address: `http://127.0.0.1:${context.env.port}`,
    ...(await demoCredentials(context)),
    clock: context.clock,
    from,
    onError: (error) => logger.warn({ err: error }, 'the simulator was not heard'),
  });
  stops.push(() => simulator.stop());
}

function tell(message: Message): void {
  if (process.connected) process.send?.(message);
}

async function fail(error: unknown): Promise<void> {
  // What was under way when its ground was taken away fails; that is no fault.
  if (stopping) return;
  logger.fatal({ err: error }, 'the server cannot go on');
  await stop('a fault', 1);
}

/** Ends what was started, the last first; what takes too long is left to the end of the process. */
async function stop(why: string, code: number): Promise<void> {
  if (stopping) return;
  stopping = true;
  logger.info({ why }, 'stopping');
  setTimeout(() => process.exit(code || 1), 15_000).unref();
  for (const act of stops.reverse()) {
    await Promise.resolve(act()).catch((error: unknown) =>
      logger.error({ err: error }, 'stopping'),
    );
  }
  process.exit(code);
}
