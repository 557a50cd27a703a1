/** One change told to open clients: units whose picture changed, or alerts of a person's watches. */
export interface LiveEvent {
  sequence: number;
  unitIds: number[];
  alerts: boolean;
}

type Listener = (event: LiveEvent) => void;

const KEPT = 2_000;

/**
 * The one publisher of live events in this process: a gap-free sequence, the last 2,000 kept
 * for clients that come back with `Last-Event-ID`.
 */
export class LiveEvents {
  private sequence = 0;
  private readonly kept: LiveEvent[] = [];
  private readonly listeners = new Set<Listener>();

  publish(change: { unitIds?: number[]; alerts?: boolean }): void {
    this.sequence += 1;
    const event = {
      sequence: this.sequence,
      unitIds: change.unitIds ?? [],
      alerts: change.alerts ?? false,
    };
    this.kept.push(event);
    if (this.kept.length > KEPT) this.kept.shift();
    for (const listener of this.listeners) listener(event);
  }

  /** The last sequence number given out; 0 before the first. */
  get last(): number {
    return this.sequence;
  }

  /** Events after `sequence`, or null when they are no longer (or not yet) known here. */
  since(sequence: number): LiveEvent[] | null {
    const oldest = this.kept[0]?.sequence ?? this.sequence + 1;
    if (sequence > this.sequence || sequence < oldest - 1) return null;
    return this.kept.filter((event) => event.sequence > sequence);
  }

  /** Calls `listener` for each event to come; returns the way to stop. */
  subscribe(listener: Listener): () => void {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }
}
