import { useInfiniteQuery } from '@tanstack/react-query';
import { LedgerTable, type Column } from '../../../components/ui/ledger-table';
import { MoreRows } from '../../../components/ui/more-rows';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { formatInstant, zoneName } from '../../../lib/times';
import { useMedia } from '../../../lib/use-media';
import { useNow } from '../../../lib/use-now';
import { counted } from '../../../lib/words';
import type { RebuildView } from '../../../lib/wire';
import { rebuildListQuery } from '../api/rebuild-list';
import { sayCause } from '../say-rebuild';
import { RebuildProgress } from './rebuild-progress';
import { TurnRebuild } from './turn-rebuild';

/** What was and is made anew, newest first, each with its bar and the way to stop it. */
export function RebuildTable({ zone }: { zone: string }) {
  const now = useNow();
  const list = useInfiniteQuery(rebuildListQuery);
  const isNarrow = useMedia('(max-width: 1023px)');
  if (list.isPending) return <LoadingRows of="the list" rows={6} />;
  if (list.isError && !list.data) {
    return (
      <ErrorNotice
        what="The list did not come"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    );
  }
  const rows = list.data.pages.flatMap(({ data }) => data.map((row) => ({ row })));
  if (rows.length === 0) {
    return (
      <EmptyNotice says="Nothing has had to be made anew yet.">
        It begins by itself when an antenna, a read point, a tag or a car is entered otherwise and
        reads are there that it bears on.
      </EmptyNotice>
    );
  }
  const time = (instant: string | null) => (
    <span className="mono text-ink-soft">{instant && formatInstant(instant, zone, now)}</span>
  );
  return (
    <>
      <LedgerTable
        caption="What is made anew"
        columns={columnsOf(time, zoneName(zone, now))}
        rows={rows}
        keyOf={({ id }) => String(id)}
        margin={() => null}
        narrow={isNarrow ? (row) => <NarrowRebuild rebuild={row} time={time} /> : undefined}
        narrowAct={(row) => <TurnRebuild rebuild={row} />}
        scroller={null}
      />
      <MoreRows list={list} word="Earlier ones" />
    </>
  );
}

type Time = (instant: string | null) => React.ReactNode;

function columnsOf(time: Time, name: string): Column<RebuildView>[] {
  return [
    { id: 'what', heading: 'Because', wraps: true, cell: ({ label }) => label },
    {
      id: 'covers',
      heading: `Covers reads, ${name}`,
      width: 236,
      cell: (row) => <Covered rebuild={row} time={time} />,
    },
    { id: 'done', heading: 'Done', width: 220, cell: (row) => <RebuildProgress rebuild={row} /> },
    {
      id: 'asked',
      heading: 'Asked for',
      width: 196,
      wraps: true,
      cell: (row) => (
        <>
          {time(row.requestedAt)} {sayCause(row)}
        </>
      ),
    },
    { id: 'finished', heading: 'Finished', width: 110, cell: (row) => time(row.finishedAt) },
    {
      id: 'act',
      heading: <span className="only-heard">What can be done</span>,
      width: 64,
      cell: (row) => <TurnRebuild rebuild={row} />,
    },
  ];
}

function Covered({ rebuild: { since, until, readPoints }, time }: NarrowProps) {
  if (since === null) return <span className="text-ink-soft">nothing any more</span>;
  return (
    <span title={counted(readPoints, 'read point', 'read points')}>
      {time(since)} to {time(until)}
    </span>
  );
}

interface NarrowProps {
  rebuild: RebuildView;
  time: Time;
}

function NarrowRebuild({ rebuild, time }: NarrowProps) {
  return (
    <>
      <span className="block whitespace-normal">{rebuild.label}</span>
      <span className="block py-6">
        <RebuildProgress rebuild={rebuild} />
      </span>
      <span className="block whitespace-normal text-ink-soft">
        Asked for {time(rebuild.requestedAt)} {sayCause(rebuild)}
        {rebuild.finishedAt ? <>, finished {time(rebuild.finishedAt)}</> : null}
      </span>
    </>
  );
}
