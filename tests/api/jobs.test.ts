import { expect, test, vi } from 'vitest';
import type { Job } from '../../server/jobs/registry.js';
import { startJobs } from '../../server/jobs/schedule.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';

const db = useTestDatabase();
const patience = { timeout: 20_000, interval: 20 };

function job(run: Job['run']): Job {
  return { name: 'a-test', everySeconds: 1, run };
}

test('a job comes again although it failed', async () => {
  const context = buildContext(db);
  const logged = vi.spyOn(context.logger, 'error');
  const run = vi.fn().mockRejectedValueOnce(new Error('the first time')).mockResolvedValue(null);
  const running = startJobs(context, [job(run)]);
  await vi.waitFor(() => expect(run.mock.calls.length).toBeGreaterThan(1), patience);
  await running.stop();
  expect(logged).toHaveBeenCalledOnce();
  expect(run).toHaveBeenCalledWith(context);
});

test('of two servers one does a job at a time', async () => {
  const asked = vi.spyOn(db.pool, 'query');
  const triesForLease = () =>
    asked.mock.calls.filter(([text]) => JSON.stringify(text).includes('INTO worker_leases')).length;
  let atOnce = 0;
  let most = 0;
  let finished = 0;
  const run = async () => {
    atOnce += 1;
    most = Math.max(most, atOnce);
    const before = triesForLease();
    // Until the other server has tried at least once meanwhile.
    await vi.waitUntil(() => finished > 1 || triesForLease() > before, patience);
    atOnce -= 1;
    finished += 1;
  };
  const servers = [1, 2].map(() => startJobs(buildContext(db), [job(run)]));
  await vi.waitFor(() => expect(finished).toBeGreaterThan(1), patience);
  await Promise.all(servers.map((server) => server.stop()));
  expect(most).toBe(1);
});

test('stopping waits for what is under way and starts nothing new', async () => {
  const gate: { open?: () => void } = {};
  const run = vi.fn(() => new Promise<void>((resolve) => (gate.open = resolve)));
  const running = startJobs(buildContext(db), [job(run)]);
  await vi.waitFor(() => expect(run).toHaveBeenCalledOnce(), patience);
  let hasStopped = false;
  const stopping = running.stop().then(() => (hasStopped = true));
  await db.pool.query('SELECT 1');
  expect(hasStopped).toBe(false);
  gate.open?.();
  await stopping;
  expect(run).toHaveBeenCalledOnce();
});
