import { useInfiniteQuery } from '@tanstack/react-query';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { LedgerTable } from '../../../components/ui/ledger-table';
import { MoreRows } from '../../../components/ui/more-rows';
import { useMedia } from '../../../lib/use-media';
import type { EquipmentDetail } from '../../../lib/wire';
import { unitReportsQuery } from '../api/unit-reports';
import { EyeReport } from './eye-report';
import { NarrowReport, ReportMark, reportColumns } from './report-columns';
import { TakeBackReport } from './take-back-report';

interface Props {
  unit: EquipmentDetail;
  zone: string;
  now: number;
}

/** What others said of the car: messages of organisations, and what was seen by eye. */
export function UnitReports({ unit, zone, now }: Props) {
  const { unitId } = unit;
  const list = useInfiniteQuery(unitReportsQuery(unitId));
  const isNarrow = useMedia('(max-width: 767px)');
  if (list.isPending) return <LoadingRows of="the reports" rows={3} />;
  if (list.isError && !list.data) {
    return (
      <ErrorNotice
        what="The reports did not come"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    );
  }
  const rows = list.data.pages.flatMap(({ data }) => data.map((row) => ({ row })));
  const sites = list.data.pages[0]?.can.reportAt ?? [];
  return (
    <>
      {sites.length > 0 ? <EyeReport unit={unit} sites={sites} /> : null}
      {rows.length === 0 ? (
        <EmptyNotice says="Nobody has reported it." />
      ) : (
        <LedgerTable
          caption="Reports"
          columns={reportColumns(unitId, zone, now)}
          rows={rows}
          keyOf={({ kind, id }) => `${kind} ${id}`}
          margin={(row) => <ReportMark report={row} />}
          narrow={isNarrow ? (row) => <NarrowReport row={row} zone={zone} now={now} /> : undefined}
          narrowAct={(row) => <TakeBackReport unitId={unitId} report={row} />}
          scroller={null}
        />
      )}
      <MoreRows list={list} word="Earlier reports" />
    </>
  );
}
