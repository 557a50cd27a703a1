/** Weight of each letter of an equipment initial in its 19 bits. */
const WEIGHTS = [27 ** 3, 27 ** 2, 27, 1];

/**
 * The number that stands for an initial of 1-4 capitals (AAR S-918): the first letter counts
 * from A = 0, the others from A = 1 with blank = 0. Throws a RangeError on any other initial.
 */
export function initialValue(initial: string): number {
  if (!/^[A-Z]{1,4}$/.test(initial)) {
    throw new RangeError('An equipment initial is one to four capital letters');
  }
  return [...initial].reduce((total, letter, index) => {
    const value = letter.charCodeAt(0) - (index === 0 ? 65 : 64);
    return total + value * (WEIGHTS[index] ?? 0);
  }, 0);
}

/** The initial that a 19-bit number stands for; null when it spells none. */
export function initialOf(value: number): string | null {
  const first = Math.floor(value / 27 ** 3);
  if (first > 25) return null;
  const rest = [Math.floor(value / 27 ** 2) % 27, Math.floor(value / 27) % 27, value % 27];
  const letters = rest.map((digit) => (digit === 0 ? ' ' : String.fromCharCode(64 + digit)));
  const initial = (String.fromCharCode(65 + first) + letters.join('')).trimEnd();
  return initial.includes(' ') ? null : initial;
}
