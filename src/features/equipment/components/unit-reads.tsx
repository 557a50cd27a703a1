import { useState } from 'react';
import { useInfiniteQuery } from '@tanstack/react-query';
import { Button } from '../../../components/ui/button';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { LedgerTable } from '../../../components/ui/ledger-table';
import type { Column } from '../../../components/ui/ledger-table';
import { MoreRows } from '../../../components/ui/more-rows';
import { formatToTheMillisecond, zoneName } from '../../../lib/times';
import { useNow } from '../../../lib/use-now';
import { useMedia } from '../../../lib/use-media';
import type { RawReadView } from '../../../lib/wire';
import { readsQuery } from '../api/reads';

interface Props {
  unitId: string;
  zone: string;
}

/** The reads as the readers gave them, fetched when asked for. */
export function UnitReads({ unitId, zone }: Props) {
  const [isOpen, setOpen] = useState(false);
  if (!isOpen) return <Button onClick={() => setOpen(true)}>Show the raw reads</Button>;
  return <Reads unitId={unitId} zone={zone} />;
}

function Reads({ unitId, zone }: Props) {
  const now = useNow();
  const list = useInfiniteQuery(readsQuery(unitId));
  const isNarrow = useMedia('(max-width: 767px)');
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
  if (rows.length === 0) return <EmptyNotice says="No read of it is kept." />;
  return (
    <>
      <LedgerTable
        caption="Raw reads"
        columns={readColumns(zone, zoneName(zone, now))}
        rows={rows}
        keyOf={({ site, antenna, readAt, tag }) => `${site.code} ${antenna} ${readAt} ${tag}`}
        margin={() => null}
        narrow={isNarrow ? (row) => <NarrowRead row={row} zone={zone} /> : undefined}
        scroller={null}
      />
      <MoreRows list={list} word="Earlier reads" />
    </>
  );
}

function readColumns(zone: string, name: string): Column<RawReadView>[] {
  return [
    {
      id: 'at',
      heading: `Read at, ${name}`,
      width: 208,
      cell: ({ readAt }) => <span className="mono text-note">{sayAt(readAt, zone)}</span>,
    },
    {
      id: 'site',
      heading: 'Reader',
      cell: ({ site, readPoint }) => `${site.name}: ${readPoint.name}`,
    },
    { id: 'antenna', heading: 'Antenna', width: 70, cell: sayAntenna },
    {
      id: 'tag',
      heading: 'Tag',
      width: 262,
      cell: ({ tag }) => <span className="mono text-small">{tag}</span>,
    },
    { id: 'rssi', heading: 'dBm', width: 52, number: true, cell: ({ rssi }) => rssi },
    { id: 'count', heading: 'Count', width: 52, number: true, cell: ({ count }) => count },
  ];
}

const sayAt = (instant: string, zone: string): string => formatToTheMillisecond(instant, zone);
const sayAntenna = ({ antenna, antennaSide }: RawReadView): string =>
  antennaSide ? `${antenna}, ${antennaSide}` : String(antenna);

function NarrowRead({ row, zone }: { row: RawReadView; zone: string }) {
  return (
    <>
      <span className="mono text-note">{sayAt(row.readAt, zone)}</span>
      <span className="block">
        {row.site.name}: {row.readPoint.name}, antenna {sayAntenna(row)}
      </span>
      <span className="mono block text-small break-all whitespace-normal">{row.tag}</span>
    </>
  );
}
