/** Numbers that look random and are the same for the same seed (mulberry32). */
export class SeededRandom {
  private state: number;

  constructor(seed: number) {
    this.state = seed >>> 0;
  }

  /** At least 0, below 1. */
  next(): number {
    this.state = (this.state + 0x6d2b79f5) >>> 0;
    let t = this.state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  }

  between(low: number, high: number): number {
    return low + this.next() * (high - low);
  }

  /** A whole number from `low` to `high`, both included. */
  whole(low: number, high: number): number {
    return low + Math.floor(this.next() * (high - low + 1));
  }

  chance(probability: number): boolean {
    return this.next() < probability;
  }

  /** Normally distributed (Box and Muller 1958), mean 0. */
  normal(deviation: number): number {
    const radius = Math.sqrt(-2 * Math.log(1 - this.next()));
    return deviation * radius * Math.cos(2 * Math.PI * this.next());
  }

  /** One of the items, of which there is at least one. */
  pick<T>(items: readonly T[]): T {
    return items[this.whole(0, items.length - 1)] as T;
  }

  shuffled<T>(items: readonly T[]): T[] {
    const copy = [...items];
    for (let last = copy.length - 1; last > 0; last -= 1) {
      const other = this.whole(0, last);
      [copy[last], copy[other]] = [copy[other] as T, copy[last] as T];
    }
    return copy;
  }
}
