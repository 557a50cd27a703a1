import { describe, expect, test } from 'vitest';
import { canonicalEpc } from '../../server/domain/identifiers/epc.js';
import { resolveTag } from '../../server/domain/identifiers/resolve-tag.js';

// Sources: the three hex values are the examples in the documentation of the npm library epc-tds;
// the GIAI-96 follows the partition table of the GS1 EPC Tag Data Standard, 14.6.5 (partition 5:
// 24 bits company prefix 0614141, 58 bits asset reference 12345, filter 0).
const SGTIN_96 = '3074257BF7194E4000001A85';
const SSCC_96 = '3178E61C883950F59A000000';
const GRAI_170 = '377A6BB0C1BDA6D9B664D1AB266D1AB266D1AB266D00';
const GIAI_96 = '3414257BF400000000003039';

describe('EPC by the GS1 Tag Data Standard', () => {
  test.each([SGTIN_96, SSCC_96, GRAI_170, GIAI_96])('%s stands for itself', (hex) => {
    expect(canonicalEpc(hex)).toBe(hex);
    expect(canonicalEpc(` ${hex.toLowerCase()}\n`)).toBe(hex);
    expect(resolveTag(hex)).toEqual({ kind: 'epc', value: hex });
  });

  test('the zeros that a reader pads with make no other tag', () => {
    expect(canonicalEpc(`${GIAI_96}00000000`)).toBe(GIAI_96);
    expect(resolveTag(`${GIAI_96}00000000`)).toEqual({ kind: 'epc', value: GIAI_96 });
    expect(canonicalEpc(`${GIAI_96}00000001`)).toBeNull();
  });

  test('a tag URI stands for the same tag as its hex', () => {
    expect(canonicalEpc('urn:epc:tag:giai-96:0.0614141.12345')).toBe(GIAI_96);
    expect(canonicalEpc('urn:epc:tag:sgtin-96:3.0614141.812345.6789')).toBe(SGTIN_96);
    expect(canonicalEpc('urn:epc:tag:giai-96:9.0614141.12345')).toBeNull();
    expect(canonicalEpc('urn:epc:tag:giai-96:0.0614141.12x45')).toBeNull();
  });

  test.each([
    ['an unknown header', 'FF74257BF7194E4000001A85'],
    ['an invalid partition', '34FFFFFFFFFFFFFFFFFFFFFF'],
    ['a truncated tag', '377A6BB0C1BDA6D9B664D1AB'],
    ['no hex', 'not an EPC at all, but long enough'],
    ['nothing', ''],
  ])('%s is no EPC', (_what, text) => {
    expect(canonicalEpc(text)).toBeNull();
    expect(resolveTag(text)).toMatchObject({ kind: 'hold', hold: 'undecodable-tag' });
  });
});
