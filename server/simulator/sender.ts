import { handReport, wheelRecord, wireRead, wireReport, type Batch } from './batches.js';

interface SenderOptions {
  address: string;
  /** What an error names it by. */
  name: string;
  /** Who sends, as headers; asked for again once the server does not know them any more. */
  credentials: () => Promise<Record<string, string>>;
  onError: (error: unknown) => void;
}

const FIRST_PAUSE_MS = 500;
const LONGEST_PAUSE_MS = 15_000;
const GIVE_UP_MS = 10_000;
/** What is kept while the server is away; the oldest go first, the next start sends them. */
const MOST_KEPT = 2_000;

/**
 * The reader of one site, or somebody who tells what no reader saw: sends its requests one after
 * another, and each until it is answered.
 */
export class Sender {
  private readonly queue: Batch[] = [];
  private readonly ending = new AbortController();
  private running: Promise<void> | null = null;
  private headers: Record<string, string> | null = null;

  constructor(private readonly options: SenderOptions) {}

  send(batches: Batch[]): void {
    this.queue.push(...batches);
    if (this.queue.length > MOST_KEPT) this.queue.splice(0, this.queue.length - MOST_KEPT);
    this.running ??= this.run().finally(() => {
      this.running = null;
    });
  }

  /** Ends the request under way and sends no more. */
  async stop(): Promise<void> {
    this.ending.abort();
    await this.running;
  }

  private async run(): Promise<void> {
    let pause = FIRST_PAUSE_MS;
    for (let batch = this.queue[0]; batch && !this.isEnding; batch = this.queue[0]) {
      if (await this.deliver(batch)) {
        this.queue.splice(this.queue.indexOf(batch), 1);
        pause = FIRST_PAUSE_MS;
      } else {
        await this.wait(pause);
        pause = Math.min(pause * 2, LONGEST_PAUSE_MS);
      }
    }
  }

  private get isEnding(): boolean {
    return this.ending.signal.aborted;
  }

  /** True when the server has answered for good; a refusal of this body would not change. */
  private async deliver(batch: Batch): Promise<boolean> {
    const { address, name, credentials, onError } = this.options;
    const { path, body } = requestOf(batch);
    try {
      this.headers ??= await credentials();
      const response = await fetch(`${address}/api/${path}`, {
        method: 'POST',
        headers: { ...this.headers, 'content-type': 'application/json' },
        body: JSON.stringify(body),
        signal: AbortSignal.any([this.ending.signal, AbortSignal.timeout(GIVE_UP_MS)]),
      });
      await response.arrayBuffer();
      if (response.ok) return true;
      if (response.status === 401) this.headers = null;
      onError(new Error(`The door ${path} answered ${response.status} to ${name}.`));
      return response.status === 400 || response.status === 413;
    } catch (error) {
      if (!this.isEnding) onError(error);
      return false;
    }
  }

  private wait(milliseconds: number): Promise<void> {
    return new Promise((resolve) => {
      const done = () => {
        clearTimeout(timer);
        this.ending.signal.removeEventListener('abort', done);
        resolve();
      };
      const timer = setTimeout(done, milliseconds);
      this.ending.signal.addEventListener('abort', done);
    });
  }
}

/** Where a batch goes, below /api, and what it says. */
function requestOf(batch: Batch): { path: string; body: object } {
  const { site } = batch;
  switch (batch.kind) {
    case 'reads':
      return { path: 'ingest/reads', body: { site, reads: batch.reads.map(wireRead) } };
    case 'wheels':
      return { path: 'ingest/wheels', body: { site, ...wheelRecord(batch.record) } };
    case 'reports':
      return {
        path: 'ingest/reports',
        body: { source: batch.reports[0]?.source, reports: batch.reports.map(wireReport) },
      };
    case 'hand':
      return {
        path: `sites/${site}/hand-reports`,
        body: { track: batch.report.track, reports: [handReport(batch.report)] },
      };
  }
}
