import { initialOf, initialValue } from './aei-initial.js';

export type TagSide = 'left' | 'right';

/** The fields of a 128-bit AEI tag (AAR S-918, rail-car layout as DOMAIN lists it by bits). */
export interface AeiTag {
  /** Equipment group code, 0-31. */
  groupCode: number;
  /** 0-3. */
  tagType: number;
  /** 1-4 capitals; null when the bits spell no initial. */
  initial: string | null;
  /** 0-999999; null when the bits are out of that range. */
  number: number | null;
  side: TagSide;
  /** Meant for rail cars; other groups may use the bits differently. */
  lengthDm: number;
  /** 1-32, meant for rail cars. */
  axles: number;
  /** Bearing type, 0-7. */
  bearing: number;
  /** 0-15. */
  platform: number;
  spare: number;
  reserved: number;
  security: number;
  /** 51 for this layout; any other code means that the fields above mean something else. */
  formatCode: number;
  /** The two bits as they stand, 0-3. */
  firstCheckSum: number;
  /** Whether it equals the one-bits of 0-59 modulo 4. */
  firstCheckSumValid: boolean;
  /** The two bits as they stand: its rule is not established, so no tag is refused for it. */
  secondCheckSum: number;
}

/** What a tag is made from; what is left out takes the value of the published samples. */
export interface AeiFields {
  groupCode: number;
  initial: string;
  number: number;
  side: TagSide;
  tagType?: number;
  lengthDm?: number;
  axles?: number;
  bearing?: number;
  platform?: number;
  spare?: number;
  reserved?: number;
  security?: number;
}

/** The data format code of the layout that `encodeAei` writes. */
export const AEI_FORMAT = 51;

/** Number of one-bits of a 32-bit word. */
function oneBits(word: number): number {
  let rest = word;
  let count = 0;
  while (rest !== 0) {
    rest &= rest - 1;
    count += 1;
  }
  return count;
}

/** True for 32 hex digits with the AEI frame markers (bits 62-63 = 11, 126-127 = 01). */
export function isAeiHex(hex: string): boolean {
  return /^[0-9A-Fa-f]{15}[37BFbf][0-9A-Fa-f]{15}[159Dd]$/.test(hex);
}

/** 32 bits of the tag, from bit 32 times `index` on. */
function wordAt(hex: string, index: number): number {
  return parseInt(hex.slice(index * 8, index * 8 + 8), 16);
}

/** Reads the fields of an AEI tag; null when `isAeiHex` is false. Judges nothing else. */
export function decodeAei(hex: string): AeiTag | null {
  if (!isAeiHex(hex)) return null;
  const w0 = wordAt(hex, 0);
  const w1 = wordAt(hex, 1);
  const w2 = wordAt(hex, 2);
  const w3 = wordAt(hex, 3);
  const number = ((w0 & 0x3f) << 14) | (w1 >>> 18);
  const firstCheckSum = (w1 >>> 2) & 3;
  return {
    groupCode: w0 >>> 27,
    tagType: (w0 >>> 25) & 3,
    initial: initialOf((w0 >>> 6) & 0x7ffff),
    number: number <= 999_999 ? number : null,
    side: (w1 >>> 17) & 1 ? 'right' : 'left',
    lengthDm: ((w2 & 3) << 10) | ((w3 >>> 31) << 9) | ((w1 >>> 8) & 0x1ff),
    axles: (((w1 >>> 4) & 0xf) << 1) + (w2 >>> 31) + 1,
    bearing: (w2 >>> 28) & 7,
    platform: (w2 >>> 24) & 0xf,
    spare: (w2 >>> 2) & 0x3fffff,
    reserved: (w3 >>> 22) & 0x1ff,
    security: (w3 >>> 10) & 0xfff,
    formatCode: (w3 >>> 4) & 0x3f,
    firstCheckSum,
    firstCheckSumValid: (oneBits(w0) + oneBits(w1 >>> 4)) % 4 === firstCheckSum,
    secondCheckSum: (w3 >>> 2) & 3,
  };
}

function oneBitsModulo4(bits: string): number {
  return bits.replaceAll('0', '').length % 4;
}

function write(name: string, value: number, width: number): string {
  if (!Number.isInteger(value) || value < 0 || value >= 2 ** width) {
    throw new RangeError(`${name} does not fit ${width} bits of an AEI tag`);
  }
  return value.toString(2).padStart(width, '0');
}

/**
 * Writes a tag as 32 upper-case hex digits, check sums included (the second as the one-bits of
 * 62-123 modulo 4, which the published samples agree with). Throws a RangeError for a value that
 * its field cannot hold.
 */
export function encodeAei(fields: AeiFields): string {
  const { tagType = 3, lengthDm = 0, axles = 4, bearing = 1, platform = 0 } = fields;
  const { spare = 0, reserved = 0, security = 0, number } = fields;
  if (number > 999_999) throw new RangeError('number does not fit an AEI tag');
  const length = write('lengthDm', lengthDm, 12);
  const axleBits = write('axles', axles - 1, 5);
  const first = [
    write('groupCode', fields.groupCode, 5),
    write('tagType', tagType, 2),
    write('initial', initialValue(fields.initial), 19),
    write('number', number, 20),
    fields.side === 'right' ? '1' : '0',
    length.slice(3),
    axleBits.slice(0, 4),
  ].join('');
  const second = [
    '11',
    axleBits.slice(4),
    write('bearing', bearing, 3),
    write('platform', platform, 4),
    write('spare', spare, 22),
    length.slice(0, 3),
    write('reserved', reserved, 9),
    write('security', security, 12),
    write('formatCode', AEI_FORMAT, 6),
  ].join('');
  const bits = [
    first,
    write('firstCheckSum', oneBitsModulo4(first), 2),
    second,
    write('secondCheckSum', oneBitsModulo4(second), 2),
    '01',
  ].join('');
  return (bits.match(/.{4}/g) ?? [])
    .map((nibble) => parseInt(nibble, 2).toString(16))
    .join('')
    .toUpperCase();
}
