import { LedgerTable } from '../../../components/ui/ledger-table';
import { paths } from '../../../lib/paths';
import { formatInstant } from '../../../lib/times';
import { useMedia } from '../../../lib/use-media';
import { useNow } from '../../../lib/use-now';
import { counted } from '../../../lib/words';
import type { HeldGroupView, HoldCode } from '../../../lib/wire';
import type { OnAct } from '../acting';
import { reasons } from '../reasons';
import { GroupAct } from './group-act';
import { groupColumns, sayMore, Tags } from './group-columns';

interface Props {
  code: HoldCode;
  /** Of this reason, one for each site. */
  groups: HeldGroupView[];
  /** The tags of its reads stand on the same page. */
  hasTags: boolean;
  zone: string;
  onAct: OnAct;
}

/** One reason: what it means, what to do, and the sites it stands at. */
export function ReasonSection({ code, groups, hasTags, zone, onAct }: Props) {
  const now = useNow();
  const isNarrow = useMedia('(max-width: 1023px)');
  const { heading, means, toDo } = reasons[code];
  const total = groups.reduce((sum, { count }) => sum + count, 0);
  const act = (group: HeldGroupView) => <GroupAct group={group} hasTags={hasTags} onAct={onAct} />;
  return (
    <section aria-labelledby={code} className="border-t border-ink pb-32 pt-8">
      <div className="flex flex-wrap items-baseline justify-between gap-x-20 pb-4">
        <h2 id={code} className="scroll-mt-[68px] text-lead">
          {heading}
        </h2>
        <p className="font-condensed text-table text-ink-soft">
          {counted(total, 'read', 'reads')} at {counted(groups.length, 'site', 'sites')}
        </p>
      </div>
      <p className="max-w-[72ch]">
        {means} <span className="text-ink-soft">{toDo}</span>
      </p>
      <div className="pt-12">
        <LedgerTable
          caption={heading}
          columns={groupColumns({ code, zone, now, act })}
          rows={groups.map((row) => ({ row }))}
          keyOf={({ site }) => site.code}
          margin={() => null}
          linkOf={({ site }) => paths.setAside({ code, site: site.code })}
          narrow={isNarrow ? (row) => <NarrowGroup group={row} zone={zone} now={now} /> : undefined}
          narrowAct={(row) => (row.act === 'none' ? null : act(row))}
          scroller={null}
        />
      </div>
    </section>
  );
}

interface NarrowProps {
  group: HeldGroupView;
  zone: string;
  now: number;
}

function NarrowGroup({ group, zone, now }: NarrowProps) {
  const time = (instant: string) => (
    <span className="mono">{formatInstant(instant, zone, now)}</span>
  );
  const more = sayMore(group);
  return (
    <span className="block whitespace-normal">
      <b className="font-medium">{group.site.name}</b>: {counted(group.count, 'read', 'reads')}
      <span className="block text-ink-soft">
        {time(group.oldestAt)} to {time(group.newestAt)}
        {more ? `, ${more}` : ''}
      </span>
      <Tags group={group} />
    </span>
  );
}
