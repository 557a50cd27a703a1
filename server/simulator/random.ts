/** A number in [0, 1), a stream of them from one call to the next. */
export type Random = () => number;

function hashOf(text: string): number {
  let hash = 2166136261;
  for (let index = 0; index < text.length; index += 1) {
    hash = Math.imul(hash ^ text.charCodeAt(index), 16777619);
  }
  hash = Math.imul(hash ^ (hash >>> 16), 2246822507);
  hash = Math.imul(hash ^ (hash >>> 13), 3266489909);
  return (hash ^ (hash >>> 16)) >>> 0;
}

/**
 * The stream of random numbers that belongs to `name` (FNV-1a with a finaliser, then Mulberry32):
 * the same name gives the same stream, however often and in whatever order it is asked for.
 */
export function randomOf(name: string): Random {
  let state = hashOf(name);
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296;
  };
}

/** A number between `low` and `high`, evenly. */
export function between(random: Random, low: number, high: number): number {
  return low + random() * (high - low);
}

/** A whole number from `low` to `high`, both included. */
export function wholeBetween(random: Random, low: number, high: number): number {
  return low + Math.floor(random() * (high - low + 1));
}

/** A number around 0 with standard deviation 1 (Box and Muller 1958). */
export function normal(random: Random): number {
  return Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}

/** One key of `weights`, each as likely as its weight. Throws when there is none. */
export function weighted(random: Random, weights: Record<string, number>): string {
  const entries = Object.entries(weights);
  let rest = random() * entries.reduce((sum, [, weight]) => sum + weight, 0);
  for (const [key, weight] of entries) {
    rest -= weight;
    if (rest < 0) return key;
  }
  const last = entries.at(-1);
  if (!last) throw new Error('Nothing to choose from.');
  return last[0];
}
