interface Entry {
  at: number;
  order: number;
  act: (at: number) => void;
}

/** What happens when: acts in order of time, those of one moment in the order they were noted. */
export class Agenda {
  private readonly heap: Entry[] = [];
  private noted = 0;

  note(at: number, act: (at: number) => void): void {
    this.noted += 1;
    this.heap.push({ at, order: this.noted, act });
    this.rise(this.heap.length - 1);
  }

  /** Runs every act due before `until`, those that they note included. */
  runUntil(until: number): void {
    for (let first = this.heap[0]; first && first.at < until; first = this.heap[0]) {
      this.takeFirst();
      first.act(first.at);
    }
  }

  private takeFirst(): void {
    const last = this.heap.pop();
    if (!last || this.heap.length === 0) return;
    this.heap[0] = last;
    this.sink(0);
  }

  private rise(index: number): void {
    for (let at = index; at > 0;) {
      const parent = (at - 1) >> 1;
      if (this.isBefore(parent, at)) return;
      this.swap(parent, at);
      at = parent;
    }
  }

  private sink(index: number): void {
    for (let at = index; ;) {
      const [left, right] = [2 * at + 1, 2 * at + 2];
      let least = at;
      if (left < this.heap.length && this.isBefore(left, least)) least = left;
      if (right < this.heap.length && this.isBefore(right, least)) least = right;
      if (least === at) return;
      this.swap(least, at);
      at = least;
    }
  }

  private isBefore(a: number, b: number): boolean {
    const [x, y] = [this.heap[a], this.heap[b]];
    if (!x || !y) return false;
    return x.at < y.at || (x.at === y.at && x.order < y.order);
  }

  private swap(a: number, b: number): void {
    const [x, y] = [this.heap[a], this.heap[b]];
    if (!x || !y) return;
    this.heap[a] = y;
    this.heap[b] = x;
  }
}
