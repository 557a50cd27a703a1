import type { ReactNode } from 'react';
import type { Column } from '../../../components/ui/ledger-table';
import { formatInstant, zoneName } from '../../../lib/times';
import { listed } from '../../../lib/words';
import type { HeldGroupView, HoldCode } from '../../../lib/wire';

interface Given {
  code: HoldCode;
  zone: string;
  now: number;
  act: (group: HeldGroupView) => ReactNode;
}

/** Sites of one reason: how many, from when to when, the latest tags, the one act. */
export function groupColumns({ code, zone, now, act }: Given): Column<HeldGroupView>[] {
  const time = (instant: string) => (
    <span className="mono text-ink-soft">{formatInstant(instant, zone, now)}</span>
  );
  const name = zoneName(zone, now);
  return [
    { id: 'site', heading: 'Site', width: 190, cell: ({ site }) => site.name },
    {
      id: 'count',
      heading: 'Reads',
      width: 76,
      number: true,
      cell: ({ count }) => count.toLocaleString('en-US'),
    },
    {
      id: 'oldest',
      heading: `Oldest, ${name}`,
      width: 142,
      cell: ({ oldestAt }) => time(oldestAt),
    },
    { id: 'newest', heading: 'Newest', width: 142, cell: ({ newestAt }) => time(newestAt) },
    ...moreColumn(code),
    { id: 'tags', heading: 'Latest tags', wraps: true, cell: (group) => <Tags group={group} /> },
    {
      id: 'act',
      heading: <span className="only-heard">What can be done</span>,
      width: 128,
      cell: act,
    },
  ];
}

const moreHeadings: Partial<Record<HoldCode, string>> = {
  'clock-ahead': 'Still ahead',
  'unknown-antenna': 'Numbers',
};

function moreColumn(code: HoldCode): Column<HeldGroupView>[] {
  const heading = moreHeadings[code];
  if (!heading) return [];
  const cell = (group: HeldGroupView) =>
    code === 'clock-ahead'
      ? group.stillAhead
        ? group.stillAhead.toLocaleString('en-US')
        : 'none'
      : listed(group.antennas.map(String));
  return [{ id: 'more', heading, width: 96, wraps: true, cell }];
}

/** What the reason has to add, where there is no column for it; '' for nothing. */
export function sayMore({ code, stillAhead, antennas }: HeldGroupView): string {
  if (code === 'clock-ahead' && stillAhead) return `${stillAhead} of them still ahead`;
  if (code !== 'unknown-antenna') return '';
  return `antenna ${listed(antennas.map(String))}`;
}

const MOST_TAGS = 3;

/** Different tags among the latest reads, as the reader gave them. */
export function Tags({ group }: { group: HeldGroupView }) {
  const tags = [...new Set(group.sample.map(({ tag }) => tag))].slice(0, MOST_TAGS);
  return tags.map((tag) => (
    <span key={tag} className="mono block text-small break-all whitespace-normal">
      {tag}
    </span>
  ));
}
