import { describe, expect, test } from 'vitest';
import { parseUnit } from '../../server/domain/identifiers/parse-unit.js';
import { resolveTag } from '../../server/domain/identifiers/resolve-tag.js';

describe('what people type for a car, box or wagon', () => {
  test.each([
    ['qtkx40127', 'QTKX40127', 'QTKX 40127', 'aar'],
    ['QTKX 040127', 'QTKX40127', 'QTKX 40127', 'aar'],
    ['  qtkx-000007 ', 'QTKX7', 'QTKX 7', 'aar'],
    ['Q 1', 'Q1', 'Q 1', 'aar'],
    ['zqxu 305438-1', 'ZQXU3054381', 'ZQXU 305438 1', 'iso6346'],
    ['ZQXU 305438', 'ZQXU3054381', 'ZQXU 305438 1', 'iso6346'],
    ['ZQXU 5438', 'ZQXU0054388', 'ZQXU 005438 8', 'iso6346'],
    ['ZQXZ 305438', 'ZQXZ305438', 'ZQXZ 305438', 'aar'],
    ['QXJ 12', 'QXJ12', 'QXJ 12', 'aar'],
    ['21 81 2471 217-3', '218124712173', '21 81 2471 217-3', 'uic'],
    ['218124712173', '218124712173', '21 81 2471 217-3', 'uic'],
  ])('%s is %s', (text, compact, display, scheme) => {
    expect(parseUnit(text)).toMatchObject({ kind: 'unit', identity: { compact, display, scheme } });
  });

  test('marks ending in J or Z are container numbers with a right check digit', () => {
    expect(parseUnit('ZQXZ 305438 5')).toMatchObject({
      kind: 'unit',
      identity: { compact: 'ZQXZ3054385', scheme: 'iso6346' },
    });
    expect(parseUnit('ZQXZ 305438 7')).toMatchObject({
      detail: 'ZQXZ 305438 ends in 5, not 7.',
    });
  });

  test('a number alone offers the numbers it may stand for', () => {
    expect(parseUnit('40127')).toEqual({
      kind: 'number',
      digits: '40127',
      numbers: ['40127', '040127'],
    });
    expect(parseUnit('305 438')).toEqual({ kind: 'number', digits: '305438', numbers: ['305438'] });
    expect(parseUnit('3054381')).toEqual({
      kind: 'number',
      digits: '3054381',
      numbers: ['305438'],
    });
  });

  test.each([
    ['zqxu 305438-5', 'check-digit', 'ZQXU 305438 ends in 1, not 5.'],
    ['21 81 2471 217-5', 'check-digit', '21 81 2471 217 ends in 3, not 5.'],
    ['QTKXX 40127', 'mark', 'A mark has at most four letters; QTKXX has five.'],
    ['QTKX 4012789', 'number', 'A car number has at most six digits; this has seven.'],
    [
      'ZQXU 30543811',
      'number',
      'A container number has six digits and a check digit; this has eight.',
    ],
    ['21 81 2471 217', 'number', 'A wagon number has 12 digits; this has 11.'],
    ['QTKX', 'number', 'The number after QTKX is missing.'],
    ['40127 QTKX', 'form', 'The letters come first: QTKX 40127.'],
    [
      'QT4KX 1',
      'form',
      'Letters and digits are mixed; write it like QTKX 40127, ZQXU 305438 1 or 21 81 2471 217-3.',
    ],
    [
      'QTKX 40127!',
      'form',
      'Only letters and digits belong in a number, like QTKX 40127, ZQXU 305438 1 or 21 81 2471 217-3.',
    ],
    [
      ' - ',
      'empty',
      'Write a mark and number, like QTKX 40127, ZQXU 305438 1 or 21 81 2471 217-3.',
    ],
    ['X'.repeat(40), 'form', 'That is too long for the number of a car or box.'],
  ])('%s is wrong and says why', (text, fault, detail) => {
    expect(parseUnit(text)).toEqual({ kind: 'wrong', fault, detail });
  });
});

describe('text that a reader has decoded already', () => {
  test.each([
    ['QTKX 40127', 'QTKX40127', 'car'],
    ['ZQXU 305438 1', 'ZQXU3054381', 'container'],
    ['QTKZ 40127', 'QTKZ40127', 'trailer'],
    ['21 81 2471 217-3', '218124712173', 'car'],
    // All hex digits, yet no EPC: too short for one.
    ['ABCD123456', 'ABCD123456', 'car'],
  ])('%s names %s, a %s', (text, compact, equipmentKind) => {
    expect(resolveTag(` ${text}\r\n`)).toMatchObject({
      kind: 'text',
      value: text,
      equipmentKind,
      identity: { compact },
    });
  });

  test.each([
    ['ZQXU 305438 5', 'check-failed'],
    ['21 81 2471 217-5', 'check-failed'],
    ['40127', 'undecodable-tag'],
    ['NO READ', 'undecodable-tag'],
    ['QTKX\u0000 40127', 'undecodable-tag'],
    ['QTKX\t40127', 'undecodable-tag'],
    ['', 'undecodable-tag'],
  ])('%j is set aside: %s', (text, reason) => {
    expect(resolveTag(text)).toEqual({ kind: 'hold', value: text, hold: reason });
  });
});
