import { useMutation, useQueryClient } from '@tanstack/react-query';
import { sayReason } from '../../../components/ui/notice';
import type { RebuildView } from '../../../lib/wire';
import { turnRebuild } from '../api/turn-rebuild';

/** Stops it or lets it go on, as far as the server says one may. */
export function TurnRebuild({ rebuild }: { rebuild: RebuildView }) {
  const client = useQueryClient();
  const { id, label, can } = rebuild;
  const turn = useMutation({
    mutationFn: (act: 'stop' | 'resume') => turnRebuild(id, act),
    onSettled: () => client.invalidateQueries({ queryKey: ['rebuilds'] }),
  });
  if (turn.isError) return <span role="alert">{sayReason(turn.error)}</span>;
  if (!can.stop && !can.resume) return null;
  const act = can.stop ? 'stop' : 'resume';
  return (
    <button
      type="button"
      className="link"
      aria-disabled={turn.isPending || undefined}
      onClick={() => {
        if (!turn.isPending) turn.mutate(act);
      }}
    >
      {act === 'stop' ? 'Stop' : 'Go on'}
      <span className="only-heard">: {label}</span>
    </button>
  );
}
