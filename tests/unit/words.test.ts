import { expect, test } from 'vitest';
import { sayUnseenLeads } from '../../src/lib/words.js';

test.each([
  [['South lead'], 'Entries by the south lead are not seen'],
  [['South lead', 'East lead'], 'Entries by the south lead and the east lead are not seen'],
  [['N2 lead', 'Mill spur'], 'Entries by the N2 lead and the mill spur are not seen'],
])('leads without a reader: %j', (names, said) => {
  expect(sayUnseenLeads(names)).toBe(said);
});
