import ContainerValidator from 'container-validator';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { iso6346CheckDigit } from '../../server/domain/identifiers/iso6346.js';
import { parseUnit } from '../../server/domain/identifiers/parse-unit.js';
import { uicCheckDigit } from '../../server/domain/identifiers/uic.js';

describe('ISO 6346', () => {
  // Source: ISO 6346:1995, Annex A, worked example CSQU 305438 -> 3.
  test('the worked example of Annex A', () => {
    expect(iso6346CheckDigit('CSQU305438')).toBe(3);
    expect(parseUnit('CSQU3054383')).toMatchObject({
      kind: 'unit',
      identity: { compact: 'CSQU3054383', scheme: 'iso6346' },
    });
    expect(parseUnit('CSQU3054384')).toMatchObject({ kind: 'wrong', fault: 'check-digit' });
  });

  // Reference: the npm library container-validator, which computes the digit independently.
  const seed = Date.now() % 2_147_483_647;
  test(`agrees with container-validator on 10,000 random numbers (seed ${seed})`, () => {
    const reference = new ContainerValidator();
    const letters = fc.string({
      unit: fc.constantFrom(...'ABCDEFGHIJKLMNOPQRSTUVWXYZ'),
      minLength: 3,
      maxLength: 3,
    });
    const numbers = fc.sample(
      fc.tuple(letters, fc.constantFrom('U', 'J', 'Z'), fc.integer({ min: 0, max: 999_999 })),
      { seed, numRuns: 10_000 },
    );
    expect(numbers).toHaveLength(10_000);
    for (const [owner, category, serial] of numbers) {
      const number = `${owner}${category}${String(serial).padStart(6, '0')}`;
      const own = `${number}${iso6346CheckDigit(number)}`;
      const expected = `${number}${reference.createCheckDigit(number)}`;
      expect(own).toBe(expected);
    }
  });
});

describe('UIC wagon numbers', () => {
  // Source: UIC wagon numbering, published worked example 21 81 2471 217-3.
  test('the published worked example', () => {
    expect(uicCheckDigit('21812471217')).toBe(3);
    expect(parseUnit('218124712173')).toMatchObject({
      kind: 'unit',
      identity: { compact: '218124712173', scheme: 'uic', display: '21 81 2471 217-3' },
    });
    expect(parseUnit('218124712175')).toMatchObject({ kind: 'wrong', fault: 'check-digit' });
  });
});
