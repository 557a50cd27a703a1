import { randomBytes } from 'node:crypto';
import { HEARTBEAT_MS, type EventName } from '../contract/events.js';
import type { Context } from '../lib/context.js';
import type { LiveEvent } from '../lib/live-events.js';
import type { Actor } from '../policies/actor.js';
import { findRights } from '../queries/find-rights.js';
import { unitSourcesOf } from '../queries/narrow-units.js';
import { findAudience, isInAudience } from '../queries/who-sees-units.js';

/** An open stream of one session. `close` ends it; the client may come back by itself. */
export interface LiveClient {
  sessionId: string;
  actor: Actor;
  send(name: EventName, data: object, id: string): void;
  close(): void;
}

export interface FeedTimes {
  /** Changes within this time go out together. */
  coalesceMs: number;
  /** How often the sessions behind the streams are looked at again. */
  checkMs: number;
}

/** More changed units than this are not named: the client asks for all anew. */
const MOST_NAMED = 1_000;
const MOST_REMEMBERED = 100_000;

interface Change {
  unitIds: Set<number>;
  alerts: boolean;
  last: number;
}

/**
 * Tells the open streams what changed, each only what its person may see at that moment. One
 * publisher, one set of statements for all clients; nothing is sent to a session that has ended.
 */
export class LiveFeed {
  /** Sequence numbers begin anew with each process; ids of another one mean: reset. */
  private readonly epoch = randomBytes(4).toString('hex');
  private readonly clients = new Map<LiveClient, string | null>();
  private readonly lastSites = new Map<number, number>();
  private pending: Change | null = null;
  private stopListening: (() => void) | null = null;
  private timers: NodeJS.Timeout[] = [];
  private work: Promise<void> = Promise.resolve();

  constructor(
    private readonly context: Context,
    private readonly times: FeedTimes = { coalesceMs: 250, checkMs: HEARTBEAT_MS },
  ) {}

  /** Adds a stream; returns the way to take it out again. */
  join(client: LiveClient, lastEventId: string | undefined): () => void {
    this.clients.set(client, null);
    this.stopListening ??= this.listen();
    this.greet(client, lastEventId);
    return () => this.leave(client);
  }

  /** Streams that the person has open. */
  countOf(personId: number): number {
    return [...this.clients.keys()].filter(({ actor }) => actor.personId === personId).length;
  }

  private greet(client: LiveClient, lastEventId: string | undefined): void {
    const { liveEvents } = this.context;
    const missed = lastEventId ? this.missedSince(lastEventId) : [];
    // Until what was missed is out, the client keeps the id that it would be missed from again.
    const isBehind = lastEventId !== undefined && missed !== null && missed.length > 0;
    const id = isBehind ? lastEventId : this.idOf(liveEvents.last);
    client.send(missed ? 'ready' : 'reset', {}, id);
    if (isBehind) this.run(() => this.deliver(merge(missed), [client]));
    else this.run(() => this.dropEnded());
  }

  private missedSince(lastEventId: string): LiveEvent[] | null {
    const [epoch, sequence] = lastEventId.split('-');
    if (epoch !== this.epoch || !/^[0-9]{1,15}$/.test(sequence ?? '')) return null;
    return this.context.liveEvents.since(Number(sequence));
  }

  private leave(client: LiveClient): void {
    this.clients.delete(client);
    if (this.clients.size > 0) return;
    this.stopListening?.();
    this.stopListening = null;
    this.pending = null;
    this.timers.forEach(clearTimeout);
    this.timers = [];
  }

  private listen(): () => void {
    const check = setInterval(() => this.run(() => this.dropEnded()), this.times.checkMs);
    check.unref();
    this.timers.push(check);
    return this.context.liveEvents.subscribe((event) => this.take(event));
  }

  private take(event: LiveEvent): void {
    if (this.pending) {
      this.pending = merge([event], this.pending);
      return;
    }
    this.pending = merge([event]);
    const timer = setTimeout(() => this.flush(), this.times.coalesceMs);
    timer.unref();
    this.timers = [...this.timers.slice(0, 1), timer];
  }

  private flush(): void {
    const change = this.pending;
    this.pending = null;
    if (change) this.run(() => this.deliver(change, [...this.clients.keys()]));
  }

  /** One delivery after the other; when one fails, clients come back and ask for what they missed. */
  private run(act: () => Promise<void>): void {
    this.work = this.work.then(act).catch((error: unknown) => {
      this.context.logger.error({ err: error }, 'live events could not be told');
      for (const client of this.clients.keys()) client.close();
    });
  }

  private async deliver(change: Change, clients: LiveClient[]): Promise<void> {
    await this.dropEnded();
    const unitIds = [...change.unitIds];
    const audience =
      unitIds.length > 0
        ? await findAudience(this.context.db, unitIds, this.context.clock.now())
        : null;
    const id = this.idOf(change.last);
    for (const client of clients.filter((one) => this.clients.has(one))) {
      const sources = unitSourcesOf(client.actor);
      const seen = audience
        ? unitIds.filter((unitId) => isInAudience(audience, this.lastSites, sources, unitId))
        : [];
      if (seen.length > MOST_NAMED) client.send('reset', {}, id);
      else if (seen.length > 0) {
        const names = seen.flatMap((unitId) => audience?.names.get(unitId) ?? []);
        client.send('changed', { unitIds: names }, id);
      }
      if (change.alerts) client.send('alerts', {}, id);
    }
    if (audience) this.remember(audience.sites);
  }

  /** So that the people of the site that a unit has just left hear of it once more. */
  private remember(sites: ReadonlyMap<number, number | null>): void {
    if (this.lastSites.size > MOST_REMEMBERED) this.lastSites.clear();
    for (const [unitId, siteId] of sites) {
      if (siteId === null) this.lastSites.delete(unitId);
      else this.lastSites.set(unitId, siteId);
    }
  }

  /** Closes streams whose session has ended or whose person's rights have changed. */
  private async dropEnded(): Promise<void> {
    // Streams that open while the database answers were not asked about.
    const asked = [...this.clients.keys()];
    const sessionIds = asked.map((client) => client.sessionId);
    const rights = await findRights(this.context.db, sessionIds, this.context.clock.now());
    for (const client of asked.filter((one) => this.clients.has(one))) {
      const before = this.clients.get(client) ?? null;
      const present = rights.get(client.sessionId);
      if (present !== undefined && (before ?? present) === present) {
        this.clients.set(client, present);
        continue;
      }
      this.clients.delete(client);
      client.close();
    }
  }

  private idOf(sequence: number): string {
    return `${this.epoch}-${sequence}`;
  }
}

function merge(events: readonly LiveEvent[], before?: Change): Change {
  const change = before ?? { unitIds: new Set<number>(), alerts: false, last: 0 };
  for (const event of events) {
    for (const unitId of event.unitIds) change.unitIds.add(unitId);
    change.alerts ||= event.alerts;
    change.last = event.sequence;
  }
  return change;
}
