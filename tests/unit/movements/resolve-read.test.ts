import { describe, expect, test } from 'vitest';
import { Network, type Naming } from '../../../server/domain/movements/configuration.js';
import { historyOf } from '../../../server/domain/movements/history-of.js';
import { resolveRead } from '../../../server/domain/movements/resolve-read.js';
import { NetworkBuilder, at } from '../../support/network-builder.js';
import { tagOf, time } from '../../support/trackside.js';

const TAG = tagOf('QTKX1');

function resolve(options: {
  identities?: Naming[];
  tags?: Naming[];
  tag?: string;
  clock?: string;
  antenna?: number;
  holdCode?: string;
}) {
  const builder = new NetworkBuilder();
  const yard = builder.site('QA');
  builder.readPoint(yard, 'single', { decreasingPlace: at(yard) });
  const { identities = [], tags = [] } = options;
  const network = new Network({ ...builder.build(), identities, tags });
  return resolveRead(network, {
    siteId: yard,
    antenna: options.antenna ?? 1,
    tag: options.tag ?? TAG,
    at: time(options.clock ?? '10:00'),
    holdCode: options.holdCode ?? null,
  });
}

const named = (value: string, unit: string, from: string | null, to: string | null): Naming => ({
  value,
  unit,
  validFrom: from === null ? null : time(from),
  validTo: to === null ? null : time(to),
});

describe('which unit a read names', () => {
  test('a registered tag counts before the mark and number on it', () => {
    const tags = [named(TAG, 'by tag', null, null)];
    const identities = [named('QTKX1', 'by mark', null, null)];
    expect(resolve({ tags, identities })?.unit).toBe('by tag');
    expect(resolve({ identities })?.unit).toBe('by mark');
  });

  test.each([
    ['09:59:59.999', 'earlier'],
    ['10:00', 'later'],
  ])('at %s the mark named the %s holder', (clock, unit) => {
    const identities = [
      named('QTKX1', 'earlier', null, '10:00'),
      named('QTKX1', 'later', '10:00', null),
    ];
    expect(resolve({ identities, clock })?.unit).toBe(unit);
    expect(resolve({ identities: identities.reverse(), clock })?.unit).toBe(unit);
  });

  test('a stranger goes by the identity on its tag', () => {
    expect(resolve({})).toMatchObject({ unit: null, identity: { compact: 'QTKX1' } });
    expect(resolve({ identities: [named('QTKX1', 'gone', null, '09:00')] })?.unit).toBeNull();
  });

  test('an EPC names a unit only by registration', () => {
    const tag = '3034257BF7194E4000001A85';
    expect(resolve({ tag })).toBeNull();
    expect(resolve({ tag, tags: [named(tag, 'wagon', null, null)] })?.unit).toBe('wagon');
  });

  test.each(['clock-ahead', 'too-old'])(
    '%s was judged at the door and stays set aside',
    (holdCode) => {
      expect(resolve({ holdCode })).toBeNull();
    },
  );

  test('other reasons follow from the configuration of now', () => {
    expect(resolve({ holdCode: 'unknown-antenna' })).toMatchObject({ readPointId: 1 });
    expect(resolve({ antenna: 9 })).toBeNull();
  });

  test('a failed check sum never moves a unit', () => {
    const flipped = `${TAG.slice(0, 5)}${TAG[5] === '0' ? '1' : '0'}${TAG.slice(6)}`;
    expect(resolve({ tag: flipped })).toBeNull();
  });
});

test('history of one car goes on under its next mark', () => {
  const builder = new NetworkBuilder();
  const yard = builder.site('QA');
  const point = builder.readPoint(yard, 'single', { decreasingPlace: at(yard) });
  builder.register('car', 'car', [
    { value: 'QTKX1', validTo: time('12:00') },
    { value: 'QNEX9', validFrom: time('12:00') },
  ]);
  const reads = [
    ['QTKX1', '10:00'],
    ['QNEX9', '14:00'],
    ['QTKX1', '15:00'],
  ].map(([unit, clock]) => ({
    siteId: yard,
    antenna: point.antennas[0]?.number as number,
    tag: tagOf(unit as string),
    at: time(clock as string),
    holdCode: null,
  }));
  const { units } = historyOf({ reads, wheels: [] }, builder.build());
  expect([...units.keys()].sort()).toEqual(['QTKX1', 'car']);
  expect(units.get('car')?.stays).toMatchObject([{ lastSeenAt: time('14:00') }]);
});
