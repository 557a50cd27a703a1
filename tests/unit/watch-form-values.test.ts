import { describe, expect, test } from 'vitest';
import { sayWatch } from '../../src/features/watches/say-watch.js';
import {
  checkWatch,
  toFormValues,
  type WatchFormValues,
} from '../../src/features/watches/watch-form-values.js';

const blanks: WatchFormValues = {
  kind: 'quiet',
  what: '',
  named: '',
  sites: [],
  owner: '',
  hours: '72',
  includeOnHand: false,
  name: 'Gone quiet',
  tellMe: true,
  addresses: '',
};
const check = (changes: Partial<WatchFormValues>) => checkWatch({ ...blanks, ...changes }, 4);

describe('the blanks of a watch', () => {
  test('left as they are ask for anything, and mail to oneself', () => {
    expect(check({})).toEqual({
      input: {
        name: 'Gone quiet',
        kind: 'quiet',
        scope: {},
        includeOnHand: false,
        hours: 72,
        recipients: { people: [4], addresses: [] },
        schedule: { at: 'once' },
      },
    });
  });

  test('take cars as people write them', () => {
    expect(check({ what: 'units', named: 'qtkx 040127, ZQXU 305438' })).toMatchObject({
      input: { scope: { units: ['QTKX40127', 'ZQXU3054381'] } },
    });
  });

  test('never count standing cars in a watch for standing too long', () => {
    expect(check({ kind: 'dwell', includeOnHand: true, sites: ['ALDER'] })).toMatchObject({
      input: { kind: 'dwell', includeOnHand: false, scope: { sites: ['ALDER'] } },
    });
  });

  test('say where each is wrong', () => {
    const faulty = check({ hours: '0', name: ' ', what: 'marks', named: 'TOOLONG' });
    if (!('faults' in faulty)) throw new Error('These blanks are wrong.');
    expect(Object.keys(faulty.faults).sort()).toEqual(['hours', 'name', 'named']);
    expect(check({ hours: 'three' })).toHaveProperty('faults.hours', 'a number from 1 to 8,760');
    expect(check({ tellMe: false })).toHaveProperty('faults.addresses');
    expect(check({ addresses: 'nobody' })).toHaveProperty('faults.addresses');
  });

  test('come back from a watch as they were filled', () => {
    const filled = { ...blanks, what: 'marks', named: 'QTKX, QBLX', sites: ['ALDER'] };
    const checked = checkWatch(filled, 4);
    if (!('input' in checked)) throw new Error('These blanks are right.');
    const { recipients = { people: [], addresses: [] }, hours = 0, ...rest } = checked.input;
    const watch = {
      ...rest,
      id: 1,
      hours,
      recipients,
      owner: { id: 4, name: 'R' },
      named: { units: [], owners: [], sites: [{ code: 'ALDER', name: 'Alder Bend' }], people: [] },
      openAlerts: 0,
      createdAt: '2026-12-01T00:00:00.000Z',
      evaluatedAt: null,
    };
    expect(toFormValues(watch, 4)).toEqual(filled);
    expect(sayWatch(watch)).toBe(
      'Any car or box marked QTKX or QBLX has not been read for 72 h, last read at Alder Bend',
    );
  });
});
