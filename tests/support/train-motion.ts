import type { Direction } from '../../server/domain/movements/configuration.js';

/** A stretch without a change of acceleration; seconds, metres, metres a second (unsigned). */
interface Stretch {
  startS: number;
  durationS: number;
  from: number;
  to: number;
  startSpeed: number;
  endSpeed: number;
}

/** A point of the train going over a point of the track. */
export interface Crossover {
  atS: number;
  direction: Direction;
}

/** The movement of a train along one track: where its reference point is, from second 0 on. */
export class Motion {
  private readonly stretches: Stretch[] = [];
  private nowS = 0;

  constructor(private position: number) {}

  get endS(): number {
    return this.nowS;
  }

  /** Runs to position `to`, changing speed evenly; one of the two speeds is above 0. */
  run(to: number, startSpeed: number, endSpeed: number): this {
    const distance = Math.abs(to - this.position);
    const durationS = (2 * distance) / (startSpeed + endSpeed);
    const { nowS: startS, position: from } = this;
    this.stretches.push({ startS, durationS, from, to, startSpeed, endSpeed });
    this.nowS += durationS;
    this.position = to;
    return this;
  }

  wait(durationS: number): this {
    const { nowS: startS, position } = this;
    const still = { from: position, to: position, startSpeed: 0, endSpeed: 0 };
    this.stretches.push({ startS, durationS, ...still });
    this.nowS += durationS;
    return this;
  }

  /** When the reference point goes over `place`, and which way. */
  crossovers(place: number): Crossover[] {
    return this.stretches.flatMap((stretch) => {
      const { from, to } = stretch;
      const increasing = from < place && place <= to;
      if (!increasing && !(to <= place && place < from)) return [];
      const direction = increasing ? 'increasing' : 'decreasing';
      return [{ atS: reachedAt(stretch, place), direction } as const];
    });
  }

  /** Spans of seconds during which the reference point is between `low` and `high`. */
  spansWithin(low: number, high: number): { fromS: number; toS: number }[] {
    const spans: { fromS: number; toS: number }[] = [];
    for (const stretch of this.stretches) {
      const near = clamp(stretch.from, low, high);
      const far = clamp(stretch.to, low, high);
      const outside = near === far && (stretch.from !== stretch.to || near !== stretch.from);
      if (outside) continue;
      const still = stretch.from === stretch.to;
      const fromS = still ? stretch.startS : reachedAt(stretch, near);
      const toS = still ? stretch.startS + stretch.durationS : reachedAt(stretch, far);
      const before = spans.at(-1);
      if (before && fromS - before.toS < 0.001) before.toS = toS;
      else spans.push({ fromS, toS });
    }
    return spans;
  }
}

function reachedAt({ startS, startSpeed, endSpeed, from, to }: Stretch, place: number): number {
  const whole = Math.abs(to - from);
  const done = Math.abs(place - from);
  if (done === 0) return startS;
  const speed = Math.sqrt(startSpeed ** 2 + ((endSpeed ** 2 - startSpeed ** 2) * done) / whole);
  return startS + (2 * done) / (startSpeed + speed);
}

function clamp(value: number, low: number, high: number): number {
  return Math.min(Math.max(value, low), high);
}
