import { useMutation, useQueryClient } from '@tanstack/react-query';
import { sayReason } from '../../../components/ui/notice';
import { formatInstant } from '../../../lib/times';
import { useNow } from '../../../lib/use-now';
import type { AlertView } from '../../../lib/wire';
import { acknowledgeAlert } from '../api/acknowledge-alert';

/** Takes the alert, or says who has taken it and when. */
export function TakeAlert({ alert, zone }: { alert: AlertView; zone: string }) {
  const client = useQueryClient();
  const now = useNow();
  const take = useMutation({
    mutationFn: () => acknowledgeAlert(alert.id),
    onSettled: () => client.invalidateQueries({ queryKey: ['alerts'] }),
  });
  if (alert.acknowledged) {
    const { at, by } = alert.acknowledged;
    return (
      <>
        {by.name} <span className="mono text-ink-soft">{formatInstant(at, zone, now)}</span>
      </>
    );
  }
  if (take.isError) return <span role="alert">{sayReason(take.error)}</span>;
  if (!alert.can.acknowledge) return null;
  return (
    <button type="button" className="link" onClick={() => take.mutate()}>
      Acknowledge<span className="only-heard"> {alert.display}</span>
    </button>
  );
}
