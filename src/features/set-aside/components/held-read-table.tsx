import { useInfiniteQuery } from '@tanstack/react-query';
import { LedgerTable } from '../../../components/ui/ledger-table';
import type { Column } from '../../../components/ui/ledger-table';
import { MoreRows } from '../../../components/ui/more-rows';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { formatInstant, formatToTheMillisecond, zoneName } from '../../../lib/times';
import { useMedia } from '../../../lib/use-media';
import { useNow } from '../../../lib/use-now';
import type { HeldReadView, HoldCode } from '../../../lib/wire';
import { heldReadsQuery } from '../api/held-reads';

interface Props {
  code: HoldCode;
  site: string | null;
  zone: string;
}

/** The reads themselves, latest first, as the reader gave them. */
export function HeldReadTable({ code, site, zone }: Props) {
  const now = useNow();
  const list = useInfiniteQuery(heldReadsQuery(code, site));
  const isNarrow = useMedia('(max-width: 1023px)');
  if (list.isPending) return <LoadingRows of="the reads" rows={10} />;
  if (list.isError && !list.data) {
    return (
      <ErrorNotice
        what="The reads did not come"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    );
  }
  const rows = list.data.pages.flatMap(({ data }) => data.map((row) => ({ row })));
  if (rows.length === 0) return <EmptyNotice says="None of them is set aside any more." />;
  return (
    <>
      <LedgerTable
        caption="Reads that are set aside"
        columns={readColumns(zone, now)}
        rows={rows}
        keyOf={(row) => `${row.site.code} ${row.antenna} ${row.readAt} ${row.tag}`}
        margin={() => null}
        narrow={isNarrow ? (row) => <NarrowRead row={row} zone={zone} now={now} /> : undefined}
        scroller={null}
      />
      <MoreRows list={list} word="Earlier reads" />
    </>
  );
}

function readColumns(zone: string, now: number): Column<HeldReadView>[] {
  return [
    {
      id: 'at',
      heading: `Read at, ${zoneName(zone, now)}`,
      width: 216,
      cell: ({ readAt }) => (
        <span className="mono text-note">{formatToTheMillisecond(readAt, zone)}</span>
      ),
    },
    { id: 'site', heading: 'Site', width: 190, cell: ({ site }) => site.name },
    { id: 'antenna', heading: 'Antenna', width: 70, number: true, cell: ({ antenna }) => antenna },
    {
      id: 'tag',
      heading: 'Tag',
      wraps: true,
      cell: ({ tag }) => <span className="mono text-small break-all whitespace-normal">{tag}</span>,
    },
    {
      id: 'received',
      heading: 'Came in',
      width: 132,
      cell: ({ receivedAt }) => (
        <span className="mono text-ink-soft">{formatInstant(receivedAt, zone, now)}</span>
      ),
    },
  ];
}

function NarrowRead({ row, zone, now }: { row: HeldReadView; zone: string; now: number }) {
  return (
    <>
      <span className="mono text-note">{formatToTheMillisecond(row.readAt, zone)}</span>
      <span className="block whitespace-normal">
        {row.site.name}, antenna {row.antenna}, came in{' '}
        <span className="mono">{formatInstant(row.receivedAt, zone, now)}</span>
      </span>
      <span className="mono block text-small break-all whitespace-normal">{row.tag}</span>
    </>
  );
}
