import { wheelRecord, wireRead, type Batch } from './batches.js';

interface SenderOptions {
  address: string;
  site: string;
  token: string;
  onError: (error: unknown) => void;
}

const FIRST_PAUSE_MS = 500;
const LONGEST_PAUSE_MS = 15_000;
const GIVE_UP_MS = 10_000;
/** What a reader keeps while the server is away; the oldest go first, the next start sends them. */
const MOST_KEPT = 2_000;

/** The reader of one site: sends its requests one after another, and each until it is answered. */
export class SiteSender {
  private readonly queue: Batch[] = [];
  private readonly ending = new AbortController();
  private running: Promise<void> | null = null;

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
    const { address, site, token, onError } = this.options;
    const isReads = batch.kind === 'reads';
    try {
      const response = await fetch(`${address}/api/ingest/${isReads ? 'reads' : 'wheels'}`, {
        method: 'POST',
        headers: { authorization: `Bearer ${token}`, 'content-type': 'application/json' },
        body: JSON.stringify(
          isReads
            ? { site, reads: batch.reads.map(wireRead) }
            : { site, ...wheelRecord(batch.record) },
        ),
        signal: AbortSignal.any([this.ending.signal, AbortSignal.timeout(GIVE_UP_MS)]),
      });
      await response.arrayBuffer();
      if (response.ok) return true;
      onError(new Error(`The ingest door answered ${response.status} to ${site}.`));
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
