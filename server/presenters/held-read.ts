import {
  actOfHold,
  type HeldGroupView,
  type HeldReadView,
  type HeldTagView,
} from '../contract/held-reads.js';
import type { HoldCode } from '../contract/ingest.js';

/** A read that is set aside, as the queries find it. */
export interface HeldReadRecord {
  site_code: string;
  site_name: string;
  antenna_no: number;
  tag: Buffer;
  read_at: Date;
  received_at: Date;
}

/** Reads of one site and reason, as the queries find them. */
export interface HeldGroupRecord {
  code: HoldCode;
  site_code: string;
  site_name: string;
  count: number;
  /** How many have a time after the present one. */
  ahead: number;
  oldest_at: Date;
  newest_at: Date;
  antennas: number[];
  sample: HeldReadRecord[];
}

/** Reads of one tag and reason, as the queries find them. */
export interface HeldTagRecord {
  tag: Buffer;
  count: number;
  oldest_at: Date;
  newest_at: Date;
}

export function presentHeldRead(row: HeldReadRecord): HeldReadView {
  return {
    site: siteOf(row),
    antenna: row.antenna_no,
    tag: row.tag.toString('utf8'),
    readAt: row.read_at.toISOString(),
    receivedAt: row.received_at.toISOString(),
  };
}

/** The group with the one act that its reason has. */
export function presentHeldGroup(group: HeldGroupRecord): HeldGroupView {
  return {
    code: group.code,
    act: actOfHold[group.code],
    site: siteOf(group),
    count: group.count,
    stillAhead: group.code === 'clock-ahead' ? group.ahead : null,
    oldestAt: group.oldest_at.toISOString(),
    newestAt: group.newest_at.toISOString(),
    antennas: group.antennas,
    sample: group.sample.map(presentHeldRead),
  };
}

export function presentHeldTag(row: HeldTagRecord): HeldTagView {
  return {
    tag: row.tag.toString('utf8'),
    count: row.count,
    oldestAt: row.oldest_at.toISOString(),
    newestAt: row.newest_at.toISOString(),
  };
}

const siteOf = (row: { site_code: string; site_name: string }) => ({
  code: row.site_code,
  name: row.site_name,
});
