import type { EquipmentDetail } from '../contract/equipment.js';
import {
  instantOrNull,
  presentEquipment,
  type EquipmentRecord,
  type IdentityRecord,
} from './equipment.js';
import { unseenLeads } from './leads.js';

export interface UnitRecord extends EquipmentRecord {
  length_dm: number | null;
  axles: number | null;
  site_leads: string | null;
}

export interface DatedIdentityRecord extends IdentityRecord {
  valid_from: Date | null;
  valid_to: Date | null;
}

export interface TagRecord {
  value: string;
  side: string | null;
  valid_from: Date | null;
  valid_to: Date | null;
}

/** The unit page's facts: the first identity is the present one. */
export function presentEquipmentDetail(
  unit: {
    row: UnitRecord;
    identities: readonly [DatedIdentityRecord, ...DatedIdentityRecord[]];
    tags: readonly TagRecord[];
    sitesOnly: boolean;
  },
  now: Date,
): EquipmentDetail {
  const [present] = unit.identities;
  return {
    ...presentEquipment(unit.row, present, now),
    lengthDm: unit.row.length_dm,
    axles: unit.row.axles,
    identities: unit.identities.map((identity) => ({
      unitId: identity.compact,
      display: identity.display,
      scheme: identity.scheme as EquipmentDetail['scheme'],
      validFrom: instantOrNull(identity.valid_from),
      validTo: instantOrNull(identity.valid_to),
      current: identity === present,
    })),
    tags: unit.tags.map((tag) => ({
      value: tag.value,
      side: tag.side as 'left' | 'right' | null,
      validFrom: instantOrNull(tag.valid_from),
      validTo: instantOrNull(tag.valid_to),
    })),
    lease: null,
    riding: [],
    carriedBy: null,
    sitesOnly: unit.sitesOnly,
    unseenLeads: unseenLeads(unit.row.site_leads),
    asOf: now.toISOString(),
  };
}
