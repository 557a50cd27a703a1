import { describe, expect, test } from 'vitest';
import { sayKnownTime } from '../../src/features/equipment/known-time.js';

const zone = 'America/Chicago';
const now = Date.parse('2026-12-01T18:00:00.000Z');
const at = '2026-11-30T20:00:00.000Z';
const said = (time: Partial<Parameters<typeof sayKnownTime>[0]>) =>
  sayKnownTime({ at, basis: 'read', bounds: null, provisional: false, ...time }, zone, now);

describe('how a time is known', () => {
  test('read', () => {
    expect(said({})).toEqual({ said: 'Mon 14:00', how: 'read' });
  });

  test('reported, and seen by eye', () => {
    expect(said({ basis: 'report' })).toEqual({ said: 'Mon 14:00', how: 'reported' });
    expect(said({ basis: 'hand' })).toEqual({ said: 'Mon 14:00', how: 'seen by eye' });
  });

  test('gone when somebody looked, with since when that can be', () => {
    const bounds = { earliest: '2026-11-30T17:20:00.000Z', latest: at };
    expect(said({ basis: 'hand', bounds })).toEqual({
      said: 'by Mon 14:00',
      how: 'seen by eye, between Mon 11:20 and 14:00',
    });
  });

  test('inferred, with its bounds and the day once', () => {
    const bounds = { earliest: '2026-11-30T17:20:00.000Z', latest: '2026-11-30T21:05:00.000Z' };
    expect(said({ basis: 'inferred', bounds })).toEqual({
      said: 'about Mon 14:00',
      how: 'inferred, between Mon 11:20 and 15:05',
    });
  });

  test('inferred over midnight, with both days', () => {
    const bounds = { earliest: '2026-11-29T17:20:00.000Z', latest: '2026-11-30T21:05:00.000Z' };
    expect(said({ basis: 'inferred', bounds }).how).toBe(
      'inferred, between Sun 11:20 and Mon 15:05',
    );
  });

  test('unknown, before the first sighting', () => {
    const bounds = { earliest: null, latest: at };
    expect(said({ at: null, basis: 'unknown', bounds })).toEqual({
      said: 'before Mon 14:00',
      how: 'not seen',
    });
  });

  test('provisional, whatever its basis', () => {
    expect(said({ provisional: true })).toEqual({
      said: 'Mon 14:00',
      how: 'may only be switching',
    });
  });

  test('not come yet', () => {
    expect(said({ at: null, basis: null })).toEqual({ said: '', how: '' });
  });
});
