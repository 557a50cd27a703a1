import { describe, expect, test } from 'vitest';
import { singleHit } from '../../src/features/look-up/single-hit.js';

const hit = (id: string, display: string, kind: 'equipment' | 'site' = 'equipment') => ({
  kind,
  id,
  display,
  formerly: null as string | null,
  detail: '',
});
const car = hit('QTKX40127', 'QTKX 40127');
const longer = hit('QTKX401270', 'QTKX 401270');
const box = hit('ZQXU3054381', 'ZQXU 305438 1');
const site = hit('ALDER', 'Alder Bend Yard', 'site');

describe('Enter in the look-up field', () => {
  test('opens the only hit, whatever was typed', () => {
    expect(singleHit('401', [car])).toBe(car);
  });

  test('opens the one with exactly that number among longer ones', () => {
    expect(singleHit('40127', [longer, car])).toBe(car);
    expect(singleHit('qtkx 040127', [longer, car])).toBe(car);
  });

  test('takes a box with or without its check digit, and a site by its name', () => {
    expect(singleHit('305438', [box, longer])).toBe(box);
    expect(singleHit('3054381', [box, longer])).toBe(box);
    expect(singleHit('alder bend yard', [site, car])).toBe(site);
  });

  test('opens the one that carried exactly that number once, unless another does now', () => {
    const renumbered = { ...hit('QBLX77', 'QBLX 77'), formerly: 'QTKX 40127' };
    expect(singleHit('40127', [longer, renumbered])).toBe(renumbered);
    expect(singleHit('qtkx 40127', [renumbered, longer])).toBe(renumbered);
    expect(singleHit('40127', [renumbered, car])).toBe(car);
  });

  test('leaves the choice where two carry the number, or none does', () => {
    expect(singleHit('40127', [car, hit('QBLX40127', 'QBLX 40127')])).toBeNull();
    expect(singleHit('4012', [car, longer])).toBeNull();
    expect(singleHit('40127', [])).toBeNull();
  });
});
