import type { Sent, SentHandReport, SentRead, SentReport, SentWheels } from '../traffic.js';
import { randomOf } from '../random.js';
import type { LooseRead } from './branch/loose-reads.js';
import type { HandReport, MovementReport } from './branch/told.js';
import { areDeaf } from './branch/faults.js';
import { deliveredAt, isSilent, shownAt } from './disturbances.js';
import type { Pass } from './pass.js';
import { renderFaint, renderReads, type RawRead } from './render-reads.js';
import { renderWheels } from './render-wheels.js';

/** Share of reads that a reader sends twice. */
const REPEATED = 0.006;
const TOLD_AFTER_MS = 20 * 60_000;

/** Everything that the readers send about one pass. */
export function sentOfPass(seed: string, pass: Pass): Sent[] {
  const { site, code } = pass.point;
  if (isSilent(seed, site, pass.at)) return [];
  const random = randomOf(`${seed} pass ${site} ${code} ${pass.at}`);
  const wheels = renderWheels(pass).map((record): SentWheels => {
    const times = {
      startedAt: shownAt(site, record.startedAt),
      endedAt: shownAt(site, record.endedAt),
    };
    const delivered = deliveredAt(site, record.endedAt);
    return { ...record, ...times, kind: 'wheels', site, readPoint: code, deliveredAt: delivered };
  });
  if (areDeaf(site, pass.at)) return wheels;
  const reads = [...renderReads(random, pass), ...faintReads(seed, pass)].flatMap((read) => {
    const sent = sentOfRead({ site, ...read });
    const again = { ...sent, deliveredAt: sent.deliveredAt + Math.round(random() * 9_000) };
    return random() < REPEATED ? [sent, again] : [sent];
  });
  return [...wheels, ...reads];
}

/** What the next track's antennas hear of a pass. */
export function faintReads(seed: string, pass: Pass): RawRead[] {
  const { faintAt, at } = pass;
  if (!faintAt) return [];
  return renderFaint(
    randomOf(`${seed} faint ${faintAt.site} ${faintAt.code} ${at}`),
    pass,
    faintAt,
  );
}

/** A read as it reaches the server. */
export function sentOfRead({ site, antenna, tag, rssi, at, shownAt: shown }: LooseRead): SentRead {
  const readAt = shown ?? shownAt(site, at);
  return { kind: 'read', site, antenna, tag, rssi, readAt, deliveredAt: deliveredAt(site, at) };
}

/** What somebody tells reaches the server twenty minutes after it was so. */
export function sentOfReport(kind: 'report', report: MovementReport): SentReport;
export function sentOfReport(kind: 'hand', report: HandReport): SentHandReport;
export function sentOfReport(kind: 'report' | 'hand', report: MovementReport | HandReport) {
  return { ...report, kind, deliveredAt: report.at + TOLD_AFTER_MS };
}
