import { describe, expect, test } from 'vitest';
import { makeId } from '../../src/lib/make-id.js';
import { sayLast, saySaid, sayWhere } from '../../src/features/equipment/where.js';
import {
  sayReported,
  sayReporter,
  sayReportPlace,
} from '../../src/features/equipment/say-report.js';
import { handReportsBody } from '../../server/contract/hand-reports.js';
import type { UnitReportView } from '../../server/contract/unit-reports.js';
import type { EquipmentItem } from '../../server/contract/equipment.js';

const common = { at: '2026-12-01T11:00:00.000Z', receivedAt: '2026-12-01T11:00:05.000Z' };
const site = { code: 'ALDER', name: 'Alder Bend Yard' };

const message = (more: Partial<Extract<UnitReportView, { kind: 'movement' }>>): UnitReportView => ({
  ...{ kind: 'movement', id: '1', ...common, site, event: 'arrived' },
  ...{ organisation: { code: 'QLINE', name: 'Quarrel Line' }, source: null, reference: null },
  ...more,
});

const eye = (more: Partial<Extract<UnitReportView, { kind: 'hand' }>>): UnitReportView => ({
  ...{ kind: 'hand', id: 'x', unitId: 'QTKX1', display: 'QTKX 1', ...common, site, track: '7' },
  ...{ position: null, seen: true, by: null, retracted: null, can: { retract: false } },
  ...more,
});

describe('a report in words', () => {
  test.each<[string, UnitReportView]>([
    ['bad ordered', message({ event: 'badOrdered' })],
    ['handed over in interchange', message({ event: 'interchanged' })],
    ['seen there', eye({})],
    ['looked for, not there', eye({ seen: false, position: 2 })],
    ['seen there, 1st along', eye({ position: 1 })],
    ['seen there, 12th along', eye({ position: 12 })],
    ['seen there, 22nd along', eye({ position: 22 })],
    ['seen there, 111th along', eye({ position: 111 })],
  ])('%s', (words, report) => {
    expect(sayReported(report)).toBe(words);
  });

  test('says who, as far as it is told', () => {
    expect(sayReporter(message({}))).toBe('Quarrel Line');
    expect(sayReporter(message({ source: 'car-desk', reference: '4711' }))).toBe(
      'Quarrel Line, car-desk 4711',
    );
    expect(sayReporter(eye({}))).toBe('by eye');
    expect(sayReporter(eye({ by: 'Ada Quill' }))).toBe('Ada Quill, by eye');
  });

  test('says where, with the track that somebody named', () => {
    expect(sayReportPlace(message({}))).toBe('Alder Bend Yard');
    expect(sayReportPlace(eye({}))).toBe('Alder Bend Yard, track 7');
    expect(sayReportPlace(eye({ track: null }))).toBe('Alder Bend Yard');
  });
});

test('what no reader saw is not called read', () => {
  const place = { ...site, latitude: 45, longitude: -93 };
  const row = (basis: 'read' | 'report' | 'hand') =>
    sayWhere({
      ...{ state: 'onHand', quiet: false, between: null },
      lastSeen: { site: place, track: '7', basis },
    } as EquipmentItem);
  expect(row('read')).toBe('Alder Bend Yard, track 7');
  expect(row('report')).toBe('Alder Bend Yard, track 7, as reported');
  expect(row('hand')).toBe('Alder Bend Yard, track 7, seen by eye');
  expect([sayLast('read'), sayLast('report'), sayLast('hand')]).toEqual([
    'read',
    'reported',
    'seen by eye',
  ]);
  expect(saySaid('riding')).toBe('');
});

test('ids made on the page are ones that the door takes, each another', () => {
  const ids = Array.from({ length: 500 }, makeId);
  const reports = ids.map((id) => ({ id, unit: 'QTKX 1', at: common.at, seen: true }));
  expect(handReportsBody.safeParse({ track: null, reports }).success).toBe(true);
  expect(new Set(ids).size).toBe(500);
  expect(ids.every((id) => /^.{14}4.{4}[89ab]/.test(id))).toBe(true);
});
