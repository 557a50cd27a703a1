import { useInfiniteQuery } from '@tanstack/react-query';
import { LedgerTable } from '../../../components/ui/ledger-table';
import type { Column } from '../../../components/ui/ledger-table';
import { MoreRows } from '../../../components/ui/more-rows';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { formatInstant, zoneName } from '../../../lib/times';
import { useMedia } from '../../../lib/use-media';
import { useNow } from '../../../lib/use-now';
import { counted } from '../../../lib/words';
import type { HeldTagView, HoldCode } from '../../../lib/wire';
import type { OnAct } from '../acting';
import { heldTagsQuery } from '../api/held-tags';

interface Props {
  code: HoldCode;
  zone: string;
  onAct: OnAct;
}

/** The tags of these reads, each once, with the way to say what wears it. */
export function HeldTagTable({ code, zone, onAct }: Props) {
  const now = useNow();
  const list = useInfiniteQuery(heldTagsQuery(code));
  const isNarrow = useMedia('(max-width: 1023px)');
  if (list.isPending) return <LoadingRows of="the tags" rows={6} />;
  if (list.isError && !list.data) {
    return (
      <ErrorNotice
        what="The tags did not come"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    );
  }
  const rows = list.data.pages.flatMap(({ data }) => data.map((row) => ({ row })));
  if (rows.length === 0) return <EmptyNotice says="Every tag has its car or box now." />;
  const act = (tag: HeldTagView) => (
    <button type="button" className="link" onClick={() => onAct({ act: 'putTag', tag })}>
      Say what wears it<span className="only-heard">: {tag.tag}</span>
    </button>
  );
  const time = (instant: string) => (
    <span className="mono text-ink-soft">{formatInstant(instant, zone, now)}</span>
  );
  return (
    <>
      <LedgerTable
        caption="Tags of no car or box"
        columns={tagColumns(time, zoneName(zone, now), act)}
        rows={rows}
        keyOf={({ tag }) => tag}
        margin={() => null}
        narrow={
          isNarrow
            ? (row) => (
                <>
                  <span className="mono block text-small break-all whitespace-normal">
                    {row.tag}
                  </span>
                  <span className="block whitespace-normal">
                    {counted(row.count, 'read', 'reads')}, {time(row.oldestAt)} to{' '}
                    {time(row.newestAt)}
                  </span>
                </>
              )
            : undefined
        }
        narrowAct={act}
        scroller={null}
      />
      <MoreRows list={list} word="Further tags" />
    </>
  );
}

function tagColumns(
  time: (instant: string) => React.ReactNode,
  name: string,
  act: (tag: HeldTagView) => React.ReactNode,
): Column<HeldTagView>[] {
  return [
    {
      id: 'tag',
      heading: 'Tag',
      wraps: true,
      cell: ({ tag }) => <span className="mono text-small break-all whitespace-normal">{tag}</span>,
    },
    {
      id: 'count',
      heading: 'Reads',
      width: 76,
      number: true,
      cell: ({ count }) => count.toLocaleString('en-US'),
    },
    { id: 'oldest', heading: `Oldest, ${name}`, width: 142, cell: (row) => time(row.oldestAt) },
    { id: 'newest', heading: 'Newest', width: 142, cell: (row) => time(row.newestAt) },
    {
      id: 'act',
      heading: <span className="only-heard">What can be done</span>,
      width: 136,
      cell: act,
    },
  ];
}
