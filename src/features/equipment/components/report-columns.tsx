import type { ReactNode } from 'react';
import type { Column } from '../../../components/ui/ledger-table';
import { formatInstant, zoneName } from '../../../lib/times';
import type { UnitReportView } from '../../../lib/wire';
import { sayReported, sayReporter, sayReportPlace } from '../say-report';
import { TakeBackReport } from './take-back-report';

/** Columns of the reports; times in `zone`, which the heading names. */
export function reportColumns(unitId: string, zone: string, now: number): Column<UnitReportView>[] {
  return [
    {
      id: 'at',
      heading: `At, ${zoneName(zone, now)}`,
      width: 124,
      cell: (row) => (
        <Said report={row}>
          <span className="mono">{formatInstant(row.at, zone, now)}</span>
        </Said>
      ),
    },
    {
      id: 'where',
      heading: 'Where',
      wraps: true,
      cell: (row) => <Said report={row}>{sayReportPlace(row)}</Said>,
    },
    {
      id: 'what',
      heading: 'What',
      wraps: true,
      cell: (row) => <Said report={row}>{sayReported(row)}</Said>,
    },
    { id: 'who', heading: 'Said by', wraps: true, cell: (row) => <SaidBy report={row} /> },
    {
      id: 'act',
      heading: <span className="only-heard">What can be done</span>,
      width: 88,
      cell: (row) => <TakeBackReport unitId={unitId} report={row} />,
    },
  ];
}

/** Struck through once it was taken back. */
function Said({ report, children }: { report: UnitReportView; children: ReactNode }) {
  return isTakenBack(report) ? <s className="text-ink-soft">{children}</s> : children;
}

const isTakenBack = (report: UnitReportView): boolean =>
  report.kind === 'hand' && report.retracted !== null;

function SaidBy({ report }: { report: UnitReportView }) {
  const by = report.kind === 'hand' ? report.retracted?.by : null;
  return (
    <>
      {sayReporter(report)}
      {isTakenBack(report) ? (
        <span className="text-ink-soft">; taken back{by ? ` by ${by}` : ''}</span>
      ) : null}
    </>
  );
}

/** Hollow, since it was said and not read; nothing once it was taken back. */
export function ReportMark({ report }: { report: UnitReportView }) {
  if (isTakenBack(report)) return null;
  return (
    <svg width="30" height="14" viewBox="0 0 30 14" aria-hidden="true" className="stroke-ink">
      <circle cx="15" cy="7" r="3.6" strokeWidth="1.4" className="fill-transparent" />
    </svg>
  );
}

interface NarrowProps {
  row: UnitReportView;
  zone: string;
  now: number;
}

/** The same in two lines, for a phone. */
export function NarrowReport({ row, zone, now }: NarrowProps) {
  return (
    <>
      <Said report={row}>
        <span className="mono">{formatInstant(row.at, zone, now)}</span> {sayReportPlace(row)}
      </Said>
      <span className="block text-ink-soft">
        <Said report={row}>{sayReported(row)}</Said>; <SaidBy report={row} />
      </span>
    </>
  );
}
