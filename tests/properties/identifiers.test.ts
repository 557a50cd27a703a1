import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { decodeAei, encodeAei, isAeiHex } from '../../server/domain/identifiers/aei.js';
import { canonicalEpc } from '../../server/domain/identifiers/epc.js';
import { aarIdentity, isoIdentity, uicIdentity } from '../../server/domain/identifiers/identity.js';
import { parseUnit } from '../../server/domain/identifiers/parse-unit.js';
import { normaliseTag, resolveTag } from '../../server/domain/identifiers/resolve-tag.js';
import { uicCheckDigit } from '../../server/domain/identifiers/uic.js';

const capitals = (minLength: number, maxLength: number) =>
  fc.string({
    unit: fc.constantFrom(...'ABCDEFGHIJKLMNOPQRSTUVWXYZ'),
    minLength,
    maxLength,
  });
const upTo = (max: number) => fc.integer({ min: 0, max });
const number = upTo(999_999);

const fields = fc.record({
  groupCode: upTo(31),
  tagType: upTo(3),
  initial: capitals(1, 4),
  number,
  side: fc.constantFrom('left' as const, 'right' as const),
  lengthDm: upTo(4095),
  axles: fc.integer({ min: 1, max: 32 }),
  bearing: upTo(7),
  platform: upTo(15),
  spare: upTo(2 ** 22 - 1),
  reserved: upTo(511),
  security: upTo(4095),
});

const identity = fc.oneof(
  fc
    .tuple(capitals(1, 4), number)
    .filter(([mark]) => !/^...U$/.test(mark))
    .map(([mark, digits]) => aarIdentity(mark, digits)),
  fc
    .tuple(capitals(3, 3), fc.constantFrom('U', 'J', 'Z'), number)
    .map(([owner, category, serial]) => isoIdentity(`${owner}${category}`, serial)),
  fc
    .bigInt({ min: 0n, max: 99_999_999_999n })
    .map((value) => String(value).padStart(11, '0'))
    .map((eleven) => uicIdentity(`${eleven}${uicCheckDigit(eleven)}`)),
);

function flipBit(hex: string, bit: number): string {
  const at = Math.floor(bit / 4);
  const flipped = parseInt(hex.charAt(at), 16) ^ (8 >> (bit % 4));
  return `${hex.slice(0, at)}${flipped.toString(16).toUpperCase()}${hex.slice(at + 1)}`;
}

describe('AEI tags', () => {
  test('every tag that can be written reads back as it was meant', () => {
    fc.assert(
      fc.property(fields, (given) => {
        const hex = encodeAei(given);
        expect(hex).toMatch(/^[0-9A-F]{32}$/);
        expect(decodeAei(hex)).toMatchObject({
          ...given,
          formatCode: 51,
          firstCheckSumValid: true,
        });
      }),
      { numRuns: 2_000 },
    );
  });

  test('one flipped bit among 0-59 fails the first check sum and moves no unit', () => {
    fc.assert(
      fc.property(fields, upTo(59), (given, bit) => {
        const broken = flipBit(encodeAei(given), bit);
        expect(decodeAei(broken)).toMatchObject({ firstCheckSumValid: false });
        expect(resolveTag(broken)).toEqual({ kind: 'hold', value: broken, hold: 'check-failed' });
      }),
      { numRuns: 2_000 },
    );
  });

  test('any 32 hex digits with the frame markers decode to fields within their ranges', () => {
    const hex32 = fc.uint8Array({ minLength: 16, maxLength: 16 }).map((bytes) => {
      bytes[7] = (bytes[7] ?? 0) | 3;
      bytes[15] = ((bytes[15] ?? 0) & ~3) | 1;
      return Buffer.from(bytes).toString('hex');
    });
    fc.assert(
      fc.property(hex32, (hex) => {
        expect(isAeiHex(hex)).toBe(true);
        const tag = decodeAei(hex);
        expect(tag?.initial ?? 'A').toMatch(/^[A-Z]{1,4}$/);
        expect(tag?.number ?? 0).toBeLessThanOrEqual(999_999);
        expect(tag?.axles).toBeGreaterThanOrEqual(1);
        // The text is compared without the case that a reader happened to write.
        expect(resolveTag(hex)).toEqual(resolveTag(hex.toUpperCase()));
        expect(canonicalEpc(hex)).toBeNull();
      }),
      { numRuns: 2_000 },
    );
  });
});

describe('written identities', () => {
  test('display and compact form are both read back as the same identity', () => {
    fc.assert(
      fc.property(identity, (given) => {
        expect(parseUnit(given.display)).toEqual({ kind: 'unit', identity: given });
        expect(parseUnit(given.compact)).toEqual({ kind: 'unit', identity: given });
        expect(parseUnit(given.display.toLowerCase())).toEqual({ kind: 'unit', identity: given });
      }),
      { numRuns: 2_000 },
    );
  });

  test('zero padding and separators change nothing for a car', () => {
    const separator = fc.constantFrom('', ' ', '  ', '-', '.', '/', '\u00a0');
    const car = fc.tuple(capitals(1, 4), number).filter(([mark]) => !/^...U$/.test(mark));
    fc.assert(
      fc.property(car, separator, ([mark, digits], between) => {
        const padded = `${mark}${between}${String(digits).padStart(6, '0')}`;
        expect(parseUnit(padded)).toEqual({ kind: 'unit', identity: aarIdentity(mark, digits) });
      }),
    );
  });

  test('any other check digit of a container is told, with the right one', () => {
    fc.assert(
      fc.property(capitals(3, 3), number, fc.integer({ min: 1, max: 9 }), (owner, serial, off) => {
        const right = isoIdentity(`${owner}U`, serial);
        const digit = Number(right.compact.slice(-1));
        const wrong = (digit + off) % 10;
        expect(parseUnit(`${right.compact.slice(0, -1)}${wrong}`)).toEqual({
          kind: 'wrong',
          fault: 'check-digit',
          detail: `${owner}U ${right.number} ends in ${digit}, not ${wrong}.`,
        });
      }),
    );
  });
});

describe('whatever arrives', () => {
  const anything = fc.oneof(
    fc.string({ unit: 'binary', maxLength: 80 }),
    fc.string({ unit: fc.constantFrom(...'0123456789ABCDEFabcdef'), maxLength: 64 }),
    fc.string({ unit: fc.constantFrom(...'QTKXUZ0123456789 -'), maxLength: 20 }),
    fc.string({ maxLength: 50 }).map((rest) => `urn:epc:tag:${rest}`),
    fc
      .tuple(fc.constantFrom('giai-96', 'giai-202', 'grai-96', 'sgtin-198'), fc.string())
      .map(([scheme, rest]) => `urn:epc:tag:${scheme}:${rest}`),
  );

  test('nothing throws, and the normalised form stays as it is', () => {
    fc.assert(
      fc.property(anything, (text) => {
        expect(['unit', 'number', 'wrong']).toContain(parseUnit(text).kind);
        const resolved = resolveTag(text);
        expect(['aei', 'text', 'epc', 'hold']).toContain(resolved.kind);
        expect(resolveTag(resolved.value)).toEqual(resolved);
        expect(normaliseTag(text)).toBe(resolved.value);
      }),
      { numRuns: 5_000 },
    );
  });

  test('what says it is wrong says so in a sentence', () => {
    fc.assert(
      fc.property(anything, (text) => {
        const parsed = parseUnit(text);
        if (parsed.kind === 'wrong') expect(parsed.detail).toMatch(/^[A-Z0-9].*\.$/);
      }),
      { numRuns: 2_000 },
    );
  });
});
