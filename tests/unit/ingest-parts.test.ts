import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { refuseDeepNesting } from '../../server/ingest/checked-json.js';
import { doorClock } from '../../server/ingest/hold-of.js';
import { parseInstant } from '../../server/contract/parse-instant.js';
import { sqlBytes, sqlCode, sqlInstant } from '../../server/ingest/sql-literals.js';

describe('the time of a read', () => {
  test.each([
    ['2026-03-04T05:06:07.890Z', '2026-03-04T05:06:07.890Z'],
    ['2026-03-04t05:06:07z', '2026-03-04T05:06:07.000Z'],
    ['2026-03-04T05:06:07.8909999Z', '2026-03-04T05:06:07.890Z'],
    ['2026-03-04T05:06:07.5Z', '2026-03-04T05:06:07.500Z'],
    ['2026-03-04T05:06:07+05:30', '2026-03-03T23:36:07.000Z'],
    ['2026-03-04T05:06:07.25-06:00', '2026-03-04T11:06:07.250Z'],
    ['2024-02-29T00:00:00-00:00', '2024-02-29T00:00:00.000Z'],
    ['2016-12-31T23:59:60Z', '2017-01-01T00:00:00.000Z'],
    ['1990-01-01T00:00:00Z', '1990-01-01T00:00:00.000Z'],
    ['2100-12-31T23:59:59.999Z', '2100-12-31T23:59:59.999Z'],
  ])('%s is %s', (text, instant) => {
    expect(new Date(parseInstant(text) ?? NaN).toISOString()).toBe(instant);
  });

  test.each([
    '2026-03-04T05:06:07',
    '2026-03-04',
    '2026-03-04 05:06:07Z',
    '2026-02-29T00:00:00Z',
    '2100-02-29T00:00:00Z',
    '2026-13-01T00:00:00Z',
    '2026-00-01T00:00:00Z',
    '2026-01-00T00:00:00Z',
    '2026-01-01T24:00:00Z',
    '2026-01-01T00:60:00Z',
    '2026-01-01T00:00:61Z',
    '2026-01-01T00:00:00+24:00',
    '2026-01-01T00:00:00+0100',
    '2026-01-01T00:00:00.Z',
    '1989-12-31T23:59:59.999Z',
    '1990-01-01T00:00:00+00:01',
    '2101-01-01T00:00:00Z',
    'now',
  ])('%s is none', (text) => {
    expect(parseInstant(text)).toBeNull();
  });

  test('is the same as the platform reads it, wherever both read one', () => {
    const instants = fc.date({
      min: new Date('1990-01-02T00:00:00Z'),
      max: new Date('2100-12-30T23:59:59.999Z'),
      noInvalidDate: true,
    });
    const offsets = fc.integer({ min: -23 * 60 - 59, max: 23 * 60 + 59 });
    fc.assert(
      fc.property(instants, offsets, (instant, minutes) => {
        const sign = minutes < 0 ? '-' : '+';
        const pad = (value: number) => String(Math.floor(value)).padStart(2, '0');
        const offset = `${sign}${pad(Math.abs(minutes) / 60)}:${pad(Math.abs(minutes) % 60)}`;
        const local = new Date(instant.getTime() + minutes * 60_000).toISOString().slice(0, -1);
        expect(parseInstant(`${local}${offset}`)).toBe(Date.parse(`${local}${offset}`));
      }),
    );
  });
});

describe('what goes into a statement as it stands', () => {
  test('holds no quote but its own, whatever text it is made from', () => {
    fc.assert(
      fc.property(fc.oneof(fc.string(), fc.string({ unit: 'binary' })), (text) => {
        const literal = sqlBytes(text);
        expect(literal).toMatch(/^(X'[0-9a-f]*'|'[0-9A-Za-z ]*')$/);
        const bytes = Buffer.from(literal.replace('X', '').slice(1, -1), 'hex');
        if (literal.startsWith('X')) expect(bytes).toEqual(Buffer.from(text));
        else expect(literal).toBe(`'${text}'`);
      }),
    );
    expect(sqlInstant(Date.UTC(2026, 2, 4, 5, 6, 7, 89))).toBe("'2026-03-04T05:06:07.089'");
    expect(sqlCode(null)).toBe('NULL');
    expect(() => sqlCode("x' OR 1=1")).toThrow();
  });
});

test('raw months are kept whole: the present one and those before it', () => {
  const clock = doorClock(new Date('2027-01-15T10:00:00.000Z'), 13);
  expect(new Date(clock.earliestMs).toISOString()).toBe('2025-12-01T00:00:00.000Z');
  expect(new Date(clock.latestMs).toISOString()).toBe('2027-01-15T10:05:00.000Z');
});

test('nesting is counted outside of texts only', () => {
  const nested = (depth: number) => '['.repeat(depth) + ']'.repeat(depth);
  expect(() => refuseDeepNesting(nested(32))).not.toThrow();
  expect(() => refuseDeepNesting(nested(33))).toThrow(/32 deep/);
  expect(() => refuseDeepNesting(`["${'['.repeat(99)}\\\\", "\\"[["]`)).not.toThrow();
  expect(() => refuseDeepNesting(`["\\\\", ${nested(32)}]`)).toThrow(/32 deep/);
  expect(() => refuseDeepNesting('"'.repeat(5) + '['.repeat(99))).not.toThrow();
});
