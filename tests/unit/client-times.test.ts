import { describe, expect, test } from 'vitest';
import { formatDuration, sayDuration } from '../../src/lib/durations.js';
import { formatDistance } from '../../src/lib/distances.js';
import {
  formatInstant,
  formatInstantInFull,
  formatToTheMillisecond,
  zoneName,
} from '../../src/lib/times.js';

const chicago = 'America/Chicago';
const now = Date.parse('2026-12-01T13:41:08.000Z');

describe('an instant on screen', () => {
  test('has its weekday alone within seven days', () => {
    expect(formatInstant('2026-11-27T11:31:00.000Z', chicago, now)).toBe('Fri 05:31');
  });

  test('has its date once the weekday could be another week’s', () => {
    expect(formatInstant('2026-11-24T13:41:00.000Z', chicago, now)).toBe('24 Nov 07:41');
  });

  test('has its date when its weekday is today’s and it was not today', () => {
    expect(formatInstant('2026-11-25T00:19:00.000Z', chicago, now)).toBe('24 Nov 18:19');
    expect(formatInstant('2026-12-01T13:03:00.000Z', chicago, now)).toBe('Tue 07:03');
  });

  test('has its year when that is another one', () => {
    expect(formatInstant('2025-12-31T18:00:00.000Z', chicago, now)).toBe('31 Dec 2025 12:00');
  });

  test('names the zone only in the hour that comes twice', () => {
    const after = Date.parse('2026-11-02T00:00:00.000Z');
    expect(formatInstant('2026-11-01T06:30:00.000Z', chicago, after)).toBe('Sun 01:30 CDT');
    expect(formatInstant('2026-11-01T07:30:00.000Z', chicago, after)).toBe('Sun 01:30 CST');
    expect(formatInstant('2026-11-01T08:30:00.000Z', chicago, after)).toBe('Sun 02:30');
  });

  test('stands alone in full', () => {
    expect(formatInstantInFull('2026-12-01T10:51:08.250Z', chicago)).toBe(
      'Tue 1 Dec 2026 04:51:08 CST',
    );
    expect(formatToTheMillisecond('2026-12-01T10:51:08.050Z', chicago)).toBe(
      '1 Dec 2026 04:51:08.050',
    );
    expect(zoneName(chicago, Date.parse('2026-07-01T00:00:00.000Z'))).toBe('CDT');
  });
});

describe('a length of time', () => {
  test.each([
    [0, '0 min'],
    [59.9, '59 min'],
    [131, '2 h 11 min'],
    [180, '3 h'],
    [360, '6 h'],
    [1439, '23 h'],
    [1440, '1 d'],
    [5880, '4 d 2 h'],
  ])('%d minutes read %s', (minutes, words) => {
    expect(formatDuration(minutes)).toBe(words);
  });

  test('is one noun in a sentence, never parted from its number', () => {
    expect(sayDuration(1)).toBe('1\u00a0minute');
    expect(sayDuration(47 * 60)).toBe('47\u00a0hours');
    expect(sayDuration(6.4 * 1440)).toBe('6\u00a0days');
  });
});

test('rail distance is in the unit of the device, one decimal under ten', () => {
  expect(formatDistance(1_609_344, 'miles')).toBe('1,000 mi');
  expect(formatDistance(1_609_344, 'kilometres')).toBe('1,609 km');
  expect(formatDistance(8_100, 'miles')).toBe('5 mi');
  expect(formatDistance(8_500, 'kilometres')).toBe('8.5 km');
});
