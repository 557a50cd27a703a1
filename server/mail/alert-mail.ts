import type { WatchKind } from '../contract/watches.js';
import { clockTime, countOf, escapeHtml, howLong, oneLine } from './words.js';

const LATE_AFTER_MS = 10 * 60_000;

/** One car, as it stands when the mail is written. */
export interface AlertMailLine {
  unitId: string;
  display: string;
  kind: string;
  siteName: string | null;
  /** How the car was last known: `read`, `report` or `hand`. */
  basis: string;
  since: Date;
  /** It was there before `since`. */
  atLeast: boolean;
}

export interface AlertMailData {
  /** Without a slash at its end. */
  publicUrl: string;
  timeZone: string;
  now: Date;
  raisedAt: Date;
  watch: { name: string; kind: WatchKind; hours: number };
  /** Alerts that this mail is about; `lines` may show only the first of them. */
  total: number;
  lines: AlertMailLine[];
}

export interface WrittenMail {
  subject: string;
  text: string;
  html: string;
}

/** Writes the mail about the alerts that one watch raised together. `lines` is never empty. */
export function writeAlertMail(data: AlertMailData): WrittenMail {
  const parts = {
    headline: headlineOf(data),
    lines: data.lines.map((line) => lineOf(line, data)),
    more:
      data.total > data.lines.length
        ? `and ${data.total - data.lines.length} more, on the list of alerts.`
        : null,
    reason: reasonOf(data),
    late: latenessOf(data),
    asOf: `Times on the clock of ${data.timeZone}. As of ${clockTime(data.now, data.timeZone)}.`,
    alertsUrl: `${data.publicUrl}/alerts`,
    caution:
      'Reads are late, missing and sometimes wrong. Nothing here authorises a movement or replaces a train list.',
  };
  return { subject: oneLine(parts.headline), text: asText(parts), html: asHtml(parts) };
}

interface Parts {
  headline: string;
  lines: { display: string; state: string; where: string; url: string }[];
  more: string | null;
  reason: string;
  late: string | null;
  asOf: string;
  alertsUrl: string;
  caution: string;
}

function headlineOf({ watch, lines, total, now }: AlertMailData): string {
  const [first] = lines;
  if (first && total === 1) {
    const place = watch.kind === 'dwell' && first.siteName ? ` at ${first.siteName}` : '';
    return `${first.display}: ${lowerFirst(stateOf(first, watch.kind, now))}${place}`;
  }
  const count = countOf(
    total,
    lines.map((line) => line.kind),
  );
  return watch.kind === 'quiet'
    ? `${count} quiet (${watch.name})`
    : `${count} past their limit (${watch.name})`;
}

/** `Quiet 4 d`, `Past its limit, 5 d`, `Past its limit, at least 5 d`. */
function stateOf(line: AlertMailLine, kind: WatchKind, now: Date): string {
  const age = howLong(now.getTime() - line.since.getTime());
  if (kind === 'quiet') return `Quiet ${age}`;
  return `Past its limit, ${line.atLeast ? 'at least ' : ''}${age}`;
}

const lastKnown: Record<string, string> = { report: 'Last reported', hand: 'Last seen by eye' };

function lineOf(line: AlertMailLine, data: AlertMailData) {
  const at = clockTime(line.since, data.timeZone);
  const site = line.siteName ?? 'a place without a name';
  const where =
    data.watch.kind === 'quiet'
      ? `${lastKnown[line.basis] ?? 'Last read'} at ${site}, ${at}`
      : `At ${site} since ${line.atLeast ? 'before ' : ''}${at}`;
  return {
    display: line.display,
    state: stateOf(line, data.watch.kind, data.now),
    where: oneLine(where),
    url: `${data.publicUrl}/equipment/${encodeURIComponent(line.unitId)}`,
  };
}

function reasonOf({ watch }: AlertMailData): string {
  const limit = `${watch.hours} h`;
  const asked = watch.kind === 'quiet' ? `no read for ${limit}` : `standing over ${limit}`;
  return `You are told because of the watch “${oneLine(watch.name)}”: ${asked}.`;
}

function latenessOf({ now, raisedAt, timeZone }: AlertMailData): string | null {
  const late = now.getTime() - raisedAt.getTime();
  if (late < LATE_AFTER_MS) return null;
  return `This mail is ${howLong(late)} late: the watch noticed on ${clockTime(raisedAt, timeZone)}.`;
}

function asText(parts: Parts): string {
  const lines = parts.lines.map(
    (line) => `${line.display}  ${line.state}\n  ${line.where}\n  ${line.url}`,
  );
  return [
    parts.headline,
    ...(parts.late ? [parts.late] : []),
    ...lines,
    ...(parts.more ? [parts.more] : []),
    `${parts.reason}\nAll alerts: ${parts.alertsUrl}`,
    `${parts.asOf}\n${parts.caution}`,
  ]
    .join('\n\n')
    .concat('\n');
}

function asHtml(parts: Parts): string {
  const paragraph = (text: string) => `<p>${escapeHtml(text)}</p>`;
  const items = parts.lines.map(
    (line) =>
      `<li><a href="${escapeHtml(line.url)}">${escapeHtml(line.display)}</a> ${escapeHtml(line.state)}<br>${escapeHtml(line.where)}</li>`,
  );
  return [
    '<!doctype html>',
    `<html lang="en"><head><meta charset="utf-8"><title>${escapeHtml(parts.headline)}</title></head><body>`,
    `<p><strong>${escapeHtml(parts.headline)}</strong></p>`,
    ...(parts.late ? [paragraph(parts.late)] : []),
    '<ul>',
    ...items,
    '</ul>',
    ...(parts.more ? [paragraph(parts.more)] : []),
    `<p>${escapeHtml(parts.reason)}<br><a href="${escapeHtml(parts.alertsUrl)}">All alerts</a></p>`,
    `<p>${escapeHtml(parts.asOf)}<br>${escapeHtml(parts.caution)}</p>`,
    '</body></html>',
  ].join('\n');
}

function lowerFirst(text: string): string {
  return text.charAt(0).toLowerCase() + text.slice(1);
}
