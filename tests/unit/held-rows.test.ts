import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { arrange } from '../../src/lib/use-held-rows.js';

interface Row {
  id: string;
  fact: number;
}
const keyOf = ({ id }: Row) => id;
const rows = (ids: string, fact = 0): Row[] => [...ids].map((id) => ({ id, fact }));
const drawn = (fresh: Row[], held: Row[] | null) => {
  const view = arrange(fresh, held, keyOf);
  return {
    order: view.rows.map(({ row, gone }) => (gone ? row.id.toLowerCase() : row.id)).join(''),
    facts: view.rows.map(({ row }) => row.fact),
    changed: view.changed,
  };
};

describe('rows under the pointer', () => {
  test('follow the list while nothing holds them', () => {
    expect(drawn(rows('CAB'), null)).toMatchObject({ order: 'CAB', changed: 0 });
  });

  test('keep their order and take new facts', () => {
    expect(drawn(rows('BAC', 7), rows('ABC'))).toEqual({
      order: 'ABC',
      facts: [7, 7, 7],
      changed: 1,
    });
  });

  test('stay, marked as gone, when they left the list', () => {
    expect(drawn(rows('AC'), rows('ABC'))).toMatchObject({ order: 'AbC', changed: 1 });
  });

  test('count a newcomer among them without showing it', () => {
    expect(drawn(rows('AXBC'), rows('ABC'))).toMatchObject({ order: 'ABC', changed: 1 });
  });

  test('take the next page at their end without counting it', () => {
    expect(drawn(rows('ABCDE'), rows('ABC'))).toMatchObject({ order: 'ABCDE', changed: 0 });
  });

  test('are all there, each once, whatever the list became', () => {
    const ids = fc.uniqueArray(fc.constantFrom(...'ABCDEFGH'), { maxLength: 8 });
    fc.assert(
      fc.property(ids, ids, (before, after) => {
        const view = arrange(rows(after.join('')), rows(before.join('')), keyOf);
        const shown = view.rows.map(({ row }) => row.id);
        expect(shown.slice(0, before.length)).toEqual(before);
        expect(new Set(shown).size).toBe(shown.length);
        const same = view.changed === 0 && view.rows.length === after.length;
        if (same) expect(shown).toEqual(after);
      }),
    );
  });
});
