import { expect } from 'vitest';

const MOST_SHOWN = 12;

/** Two canonical dumps say the same; of what they do not, a few lines are shown. */
export function expectSameHistory(actual: readonly string[], expected: readonly string[]): void {
  const [there, wanted] = [new Set(actual), new Set(expected)];
  const missing = expected.filter((line) => !there.has(line)).slice(0, MOST_SHOWN);
  const unwanted = actual.filter((line) => !wanted.has(line)).slice(0, MOST_SHOWN);
  expect({ missing, unwanted, lines: actual.length }).toEqual({
    missing: [],
    unwanted: [],
    lines: expected.length,
  });
}
