import { collectDefaultMetrics, Gauge, Histogram, Registry } from 'prom-client';

/** What one server process counts about itself. */
export interface Metrics {
  registry: Registry;
  requestSeconds: Histogram<'method' | 'route' | 'status'>;
}

/** Gauges are asked for when somebody collects, never kept up to date in between. */
export function createMetrics(gauges: {
  projectorLagMs: () => Promise<number>;
  outboxPending: () => Promise<number>;
}): Metrics {
  const registry = new Registry();
  collectDefaultMetrics({ register: registry });
  const requestSeconds = new Histogram({
    name: 'fishplate_http_request_seconds',
    help: 'Time from the request to the end of its answer.',
    labelNames: ['method', 'route', 'status'] as const,
    buckets: [0.005, 0.02, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 10],
    registers: [registry],
  });
  askedGauge(registry, {
    name: 'fishplate_projector_lag_seconds',
    help: 'Age of the oldest read that has not become history yet.',
    ask: async () => (await gauges.projectorLagMs()) / 1_000,
  });
  askedGauge(registry, {
    name: 'fishplate_outbox_pending',
    help: 'Mails that still have to go out.',
    ask: gauges.outboxPending,
  });
  return { registry, requestSeconds };
}

function askedGauge(
  registry: Registry,
  { name, help, ask }: { name: string; help: string; ask: () => Promise<number> },
): void {
  new Gauge({
    name,
    help,
    registers: [registry],
    async collect() {
      this.set(await ask());
    },
  });
}
