import { useState } from 'react';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { Button } from '../../../components/ui/button';
import { Dialog } from '../../../components/ui/dialog';
import { ErrorNotice } from '../../../components/ui/notice';
import { counted } from '../../../lib/words';
import type { WatchView } from '../../../lib/wire';
import { deleteWatch } from '../api/delete-watch';

/** Ends a watch, after saying what goes with it. */
export function EndWatch({ watch }: { watch: WatchView }) {
  const [isAsking, setAsking] = useState(false);
  const client = useQueryClient();
  const end = useMutation({
    mutationFn: () => deleteWatch(watch.id),
    onSuccess: async () => {
      setAsking(false);
      await Promise.all(
        ['watches', 'alerts'].map((key) => client.invalidateQueries({ queryKey: [key] })),
      );
    },
  });
  return (
    <>
      <button type="button" className="link" onClick={() => setAsking(true)}>
        End<span className="only-heard"> {watch.name}</span>
      </button>
      {isAsking ? (
        <Dialog heading={`End “${watch.name}”`} onClose={() => setAsking(false)}>
          <p className="mb-16">
            {watch.openAlerts > 0
              ? `Its ${counted(watch.openAlerts, 'open alert clears', 'open alerts clear')}, and no more mail comes of it.`
              : 'No more mail comes of it.'}
          </p>
          {end.isError ? <ErrorNotice what="It did not end" error={end.error} /> : null}
          <div className="flex gap-12">
            <Button kind="main" busy={end.isPending} onClick={() => end.mutate()}>
              End it
            </Button>
            <Button onClick={() => setAsking(false)}>Keep it</Button>
          </div>
        </Dialog>
      ) : null}
    </>
  );
}
