import { describe, expect, test } from 'vitest';
import { decodeAei, encodeAei, isAeiHex } from '../../server/domain/identifiers/aei.js';
import { resolveTag } from '../../server/domain/identifiers/resolve-tag.js';

// Source of all samples: documentation examples and unit tests of the open-source Rust crate
// aei_tag_parser 1.0.0 (AAR Standard S-918, rail-car layout).
const samples = [
  {
    hex: '2F3E06C007DB1E139000000000000331',
    groupCode: 5,
    tagType: 3,
    initial: 'QNSL',
    number: 502,
    side: 'right' as const,
    lengthDm: 286,
    axles: 4,
    firstCheckSum: 0b00,
    kind: 'locomotive',
  },
  {
    hex: '9EA488C030426A179000000000000331',
    groupCode: 19,
    tagType: 3,
    initial: 'IOCC',
    number: 3088,
    side: 'right' as const,
    lengthDm: 106,
    axles: 4,
    firstCheckSum: 0b01,
    kind: 'car',
  },
];

/** The first sample with the side bit flipped and nothing else (derived from it). */
const flippedSide = '2F3E06C007D91E139000000000000331';

describe.each(samples)('published tag $hex', ({ hex, kind, ...fields }) => {
  test('decodes to its published values', () => {
    expect(decodeAei(hex)).toMatchObject({
      ...fields,
      firstCheckSumValid: true,
      formatCode: 51,
      // Not published: read off the samples.
      bearing: 1,
      platform: 0,
      spare: 0,
      reserved: 0,
      security: 0,
      secondCheckSum: 0,
    });
  });

  test('is written again bit by bit from those values', () => {
    const { tagType, groupCode, initial, number, side, lengthDm, axles } = fields;
    const written = encodeAei({ tagType, groupCode, initial, number, side, lengthDm, axles });
    expect(written).toBe(hex);
  });

  test('names its unit', () => {
    expect(resolveTag(` ${hex.toLowerCase()} `)).toEqual({
      kind: 'aei',
      value: hex,
      groupCode: fields.groupCode,
      side: fields.side,
      equipmentKind: kind,
      identity: {
        compact: `${fields.initial}${fields.number}`,
        scheme: 'aar',
        mark: fields.initial,
        number: String(fields.number),
        display: `${fields.initial} ${fields.number}`,
      },
    });
  });
});

test('a flipped side bit alone fails the first check sum and names nothing', () => {
  expect(decodeAei(flippedSide)).toMatchObject({ side: 'left', firstCheckSumValid: false });
  expect(resolveTag(flippedSide)).toEqual({
    kind: 'hold',
    value: flippedSide,
    hold: 'check-failed',
  });
});

test('frame markers decide whether hex is an AEI tag', () => {
  expect(isAeiHex(samples[0]?.hex ?? '')).toBe(true);
  // Bits 62-63 = 10, bits 126-127 = 00, one digit short, one digit that is no hex.
  expect(isAeiHex('2F3E06C007DB1E129000000000000331')).toBe(false);
  expect(isAeiHex('2F3E06C007DB1E139000000000000330')).toBe(false);
  expect(isAeiHex('2F3E06C007DB1E13900000000000331')).toBe(false);
  expect(isAeiHex('2G3E06C007DB1E139000000000000331')).toBe(false);
});

// Source: equipment group codes as the same crate lists them.
test.each([
  [0, 'other'],
  [1, null],
  [4, null],
  [5, 'locomotive'],
  [6, 'endOfTrain'],
  [8, 'generatorSet'],
  [10, 'container'],
  [12, null],
  [14, null],
  [17, 'other'],
  [18, 'other'],
  [19, 'car'],
  [20, null],
  [21, 'trailer'],
  [24, 'other'],
  [27, 'chassis'],
  [28, null],
  [31, null],
])('equipment group %i is %s', (groupCode, kind) => {
  const tag = encodeAei({ groupCode, initial: 'QTKX', number: 40127, side: 'left' });
  expect(resolveTag(tag)).toMatchObject(
    kind === null ? { kind: 'hold', hold: 'not-equipment' } : { kind: 'aei', equipmentKind: kind },
  );
});

test('reserved equipment groups name no unit', () => {
  for (const groupCode of [2, 3, 7, 9, 11, 13, 15, 16, 22, 23, 25, 26, 29, 30]) {
    const tag = encodeAei({ groupCode, initial: 'QTKX', number: 1, side: 'left' });
    expect(resolveTag(tag)).toMatchObject({ kind: 'hold', hold: 'not-equipment' });
  }
});

// Source: ISO 10374 as DOMAIN describes it (owner code and serial on the tag, check digit by
// ISO 6346); the number is the worked example of ISO 6346:1995, Annex A.
test('a container tag gets the check digit of its owner code and serial', () => {
  const tag = encodeAei({ groupCode: 10, initial: 'CSQU', number: 305438, side: 'left' });
  expect(resolveTag(tag)).toMatchObject({
    equipmentKind: 'container',
    identity: { compact: 'CSQU3054383', scheme: 'iso6346', display: 'CSQU 305438 3' },
  });
});

test('marks ending in J or Z are container numbers on a container tag only', () => {
  const tag = (groupCode: number) =>
    encodeAei({ groupCode, initial: 'ZQXZ', number: 305438, side: 'left' });
  expect(resolveTag(tag(10))).toMatchObject({ identity: { scheme: 'iso6346' } });
  expect(resolveTag(tag(21))).toMatchObject({
    identity: { scheme: 'aar', compact: 'ZQXZ305438' },
  });
});

test('another data format or an initial that spells nothing is undecodable', () => {
  // Format code 0, six-bit text: bits 118-123 of the first sample cleared.
  const otherFormat = resolveTag('2F3E06C007DB1E139000000000000001');
  expect(otherFormat).toMatchObject({ kind: 'hold', hold: 'undecodable-tag' });
  // Initial 26 * 27^3 (no letter stands for 26 in front), number 0, group 19, first check sum 3.
  const bits = `10011${'11'}${(26 * 27 ** 3).toString(2)}${'0'.repeat(34)}`;
  const ones = (bits.replaceAll('0', '').length % 4).toString(2).padStart(2, '0');
  const front = BigInt(`0b${bits}${ones}11`).toString(16).padStart(16, '0');
  const noInitial = `${front}9000000000000331`;
  expect(decodeAei(noInitial)).toMatchObject({ initial: null, firstCheckSumValid: true });
  expect(resolveTag(noInitial)).toMatchObject({ kind: 'hold', hold: 'undecodable-tag' });
});
