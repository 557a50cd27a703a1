import type { UnitReportView } from '../../lib/wire';
import { sayTrack } from './where';

type MovementReport = Extract<UnitReportView, { kind: 'movement' }>;

const events: Record<MovementReport['event'], string> = {
  arrived: 'arrived',
  departed: 'departed',
  placed: 'placed for loading or unloading',
  released: 'released by the customer',
  pulled: 'pulled from the customer',
  interchanged: 'handed over in interchange',
  badOrdered: 'bad ordered',
  repaired: 'repaired',
  loaded: 'loaded',
  emptied: 'emptied',
  lifted: 'lifted off',
  grounded: 'set on the ground',
};

/** What was reported, in the floor's words. */
export function sayReported(report: UnitReportView): string {
  if (report.kind === 'movement') return events[report.event];
  if (!report.seen) return 'looked for, not there';
  return report.position === null ? 'seen there' : `seen there, ${ordinal(report.position)} along`;
}

/** Who said so, as far as the person may know. */
export function sayReporter(report: UnitReportView): string {
  if (report.kind === 'hand') return report.by ? `${report.by}, by eye` : 'by eye';
  const { organisation, source, reference } = report;
  return source && reference ? `${organisation.name}, ${source} ${reference}` : organisation.name;
}

/** "Alder Bend Yard, track 7". */
export const sayReportPlace = (report: UnitReportView): string =>
  report.kind === 'hand' && report.track
    ? `${report.site.name}, ${sayTrack(report.track)}`
    : report.site.name;

const ordinal = (n: number): string => {
  const end = n % 100 > 10 && n % 100 < 14 ? 'th' : (['th', 'st', 'nd', 'rd'][n % 10] ?? 'th');
  return `${n}${end}`;
};
