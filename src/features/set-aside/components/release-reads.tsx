import { useState } from 'react';
import { useMutation, useQuery } from '@tanstack/react-query';
import { Button } from '../../../components/ui/button';
import { ChoiceRow } from '../../../components/ui/choice-row';
import { Dialog } from '../../../components/ui/dialog';
import { ErrorNotice } from '../../../components/ui/notice';
import { formatInstantInFull } from '../../../lib/times';
import { counted } from '../../../lib/words';
import type { HeldGroupView } from '../../../lib/wire';
import { heldGroupsQuery } from '../api/held-groups';
import { releaseReads } from '../api/release-reads';

interface Props {
  group: HeldGroupView;
  zone: string;
  onClose: () => void;
  onDone: (says: string) => void;
}

/** Releases the reads of a site whose clock was ahead, after saying what comes of it. */
export function ReleaseReads({ group, zone, onClose, onDone }: Props) {
  const [openedAt] = useState(() => new Date().toISOString());
  const stillAhead = group.stillAhead ?? 0;
  const due = group.count - stillAhead;
  const [which, setWhich] = useState<'due' | 'all'>(due > 0 ? 'due' : 'all');
  const isAll = which === 'all' || stillAhead === 0;
  const release = useMutation({
    mutationFn: () => releaseReads({ site: group.site.code, until: isAll ? undefined : openedAt }),
    onSuccess: (released) =>
      onDone(
        `${counted(released, 'read is', 'reads are')} released. Their cars and boxes follow within moments.`,
      ),
  });
  const releasing = isAll ? group.count : due;
  const latest = isAll ? group.newestAt : openedAt;
  return (
    <Dialog heading={`Release reads of ${group.site.name}`} onClose={onClose}>
      {due > 0 && stillAhead > 0 ? (
        <div className="mb-16">
          <ChoiceRow
            label="Release"
            value={which}
            choices={[
              { value: 'due', label: `the ${due.toLocaleString('en-US')} whose time has come` },
              { value: 'all', label: `all ${group.count.toLocaleString('en-US')}` },
            ]}
            onChoose={setWhich}
          />
        </div>
      ) : null}
      <p className="mb-12">
        {counted(releasing, 'read is', 'reads are')} used from now on with the times that the reader
        gave, from <Time at={group.oldestAt} zone={zone} />
        {latest !== group.oldestAt ? (
          <>
            {' '}
            to <Time at={latest} zone={zone} />
          </>
        ) : null}
        . Each car and box is then shown where and when they say it was.
      </p>
      {isAll && stillAhead > 0 ? (
        <p className="mb-12 border-l-[3px] border-ochre bg-wash-ochre px-16 py-8">
          {counted(stillAhead, 'of them has', 'of them have')} a time that has not come yet: cars
          and boxes would be shown as read in the future.
        </p>
      ) : null}
      <p className="mb-16 font-medium">A release stands for good and can not be taken back.</p>
      {release.isPending ? <Progress group={group} releasing={releasing} /> : null}
      {release.isError ? <ErrorNotice what="Not all were released" error={release.error} /> : null}
      <div className="flex flex-wrap gap-12">
        <Button kind="main" busy={release.isPending} onClick={() => release.mutate()}>
          Release {counted(releasing, 'read', 'reads')}
        </Button>
        <Button onClick={onClose}>Leave them aside</Button>
      </div>
    </Dialog>
  );
}

function Time({ at, zone }: { at: string; zone: string }) {
  return <span className="mono whitespace-normal">{formatInstantInFull(at, zone)}</span>;
}

/** How far a long release is; it goes on when the dialog is closed. */
function Progress({ group, releasing }: { group: HeldGroupView; releasing: number }) {
  const { data } = useQuery(heldGroupsQuery(Infinity));
  const now = data?.data.find(
    ({ code, site }) => code === group.code && site.code === group.site.code,
  );
  const done = Math.min(releasing, Math.max(0, group.count - (now?.count ?? 0)));
  return (
    <p className="mb-16 flex flex-col gap-4 text-table" role="status">
      <progress
        className="w-full accent-verdigris"
        max={releasing}
        value={done}
        aria-label="Released"
      />
      {done.toLocaleString('en-US')} of {counted(releasing, 'read', 'reads')} released. This goes on
      when you close it.
    </p>
  );
}
