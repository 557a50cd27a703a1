import os from 'node:os';
import { Cron } from 'croner';
import { v4 as uuid } from 'uuid';
import type { Context } from '../lib/context.js';
import { withLease } from '../lib/lease.js';
import { jobs as allJobs, type Job } from './registry.js';

/** Running jobs; `stop` starts nothing new and waits for what is under way. */
export interface RunningJobs {
  stop(): Promise<void>;
}

/**
 * Starts the timed jobs, each under a lease of its own so that of several servers one does it. A
 * job that fails is logged and comes again at its next time; a job never overtakes itself.
 */
export function startJobs(context: Context, jobs: Job[] = allJobs): RunningJobs {
  const holder = `${os.hostname().slice(0, 30)}-${process.pid}-${uuid().slice(0, 8)}`;
  const underWay = new Set<Promise<void>>();
  const timers = jobs.map((job) => {
    const once = () => {
      const running = runOnce(context, job, holder).finally(() => underWay.delete(running));
      underWay.add(running);
      return running;
    };
    const seconds = job.everySeconds === 60 ? '0' : `*/${job.everySeconds}`;
    return new Cron(`${seconds} * * * * *`, { protect: true, unref: true }, once);
  });
  return {
    async stop() {
      for (const timer of timers) timer.stop();
      await Promise.all(underWay);
    },
  };
}

async function runOnce(context: Context, job: Job, holder: string): Promise<void> {
  try {
    await withLease(context.db, job.name, holder, async () => {
      await job.run(context);
    });
  } catch (error) {
    context.logger.error({ err: error, job: job.name }, 'a timed job failed');
  }
}
