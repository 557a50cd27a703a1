import { useState } from 'react';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { Dialog } from '../../../components/ui/dialog';
import { sayReason } from '../../../components/ui/notice';
import type { EquipmentDetail, Named } from '../../../lib/wire';
import type { EyeReport as Report } from '../api/send-hand-report';
import { takeBackHandReport } from '../api/take-back-hand-report';
import { sayTrack } from '../where';
import { EyeReportForm } from './eye-report-form';

interface Props {
  unit: EquipmentDetail;
  /** Those that the person may report from; at least one. */
  sites: Named[];
}

/** "I have seen it …" with its dialog, and the way back for what was just reported. */
export function EyeReport({ unit, sites }: Props) {
  const [isOpen, setOpen] = useState(false);
  const [sent, setSent] = useState<Report | null>(null);
  return (
    <p className="flex flex-wrap gap-x-20 gap-y-4 pb-12 font-condensed text-table">
      <button type="button" className="link" onClick={() => setOpen(true)}>
        Report what I saw …
      </button>
      <span role="status">
        {sent ? (
          <Sent key={sent.id} report={sent} sites={sites} onUndone={() => setSent(null)} />
        ) : null}
      </span>
      {isOpen ? (
        <Dialog heading={`${unit.display}, seen by eye`} onClose={() => setOpen(false)}>
          <EyeReportForm
            unit={unit}
            sites={sites}
            onSent={(report) => {
              setSent(report);
              setOpen(false);
            }}
          />
        </Dialog>
      ) : null}
    </p>
  );
}

interface SentProps {
  report: Report;
  sites: Named[];
  onUndone: () => void;
}

function Sent({ report, sites, onUndone }: SentProps) {
  const client = useQueryClient();
  const undo = useMutation({
    mutationFn: () => takeBackHandReport(report.site, report.id),
    onSuccess: async () => {
      onUndone();
      await client.invalidateQueries({ queryKey: ['unit'] });
    },
  });
  const site = sites.find(({ code }) => code === report.site)?.name ?? report.site;
  const track = report.track.trim();
  return (
    <>
      Reported: {report.seen ? 'seen at' : 'not at'} {site}
      {track ? `, ${sayTrack(track)}` : ''}.{' '}
      <button
        type="button"
        className="link"
        onClick={() => {
          if (!undo.isPending) undo.mutate();
        }}
      >
        Undo
      </button>
      {undo.isError ? <span className="text-oxide"> {sayReason(undo.error)}</span> : null}
    </>
  );
}
