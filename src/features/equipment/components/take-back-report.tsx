import { useMutation, useQueryClient } from '@tanstack/react-query';
import { sayReason } from '../../../components/ui/notice';
import type { UnitReportView } from '../../../lib/wire';
import { takeBackHandReport } from '../api/take-back-hand-report';

/** "Take back" beside a report by eye that the person may take back. */
export function TakeBackReport({ unitId, report }: { unitId: string; report: UnitReportView }) {
  const client = useQueryClient();
  const takeBack = useMutation({
    mutationFn: () => takeBackHandReport(report.site.code, report.id),
    onSuccess: () => client.invalidateQueries({ queryKey: ['unit', unitId] }),
  });
  if (report.kind !== 'hand' || !report.can.retract) return null;
  if (takeBack.isError) {
    return (
      <span role="alert" className="whitespace-normal">
        {sayReason(takeBack.error)}
      </span>
    );
  }
  return (
    <button
      type="button"
      className="link"
      aria-disabled={takeBack.isPending || undefined}
      onClick={() => {
        if (!takeBack.isPending) takeBack.mutate();
      }}
    >
      Take back
    </button>
  );
}
