import { Fragment } from 'react';
import { Counted, Sentence } from '../../../components/ui/sentence';
import { ageWord, useFreshness } from '../../../lib/live';
import { paths } from '../../../lib/paths';
import { formatClock } from '../../../lib/times';
import { useNow } from '../../../lib/use-now';
import { counted } from '../../../lib/words';
import type { HeldListAnswer } from '../../../lib/wire';
import { reasonOrder, reasons } from '../reasons';

interface Props {
  counts: HeldListAnswer['counts'];
  zone: string;
}

/** How many reads are set aside, and for what; each number leads to its reads. */
export function SetAsideSentence({ counts, zone }: Props) {
  const freshness = useFreshness();
  const isPast = ageWord(freshness, useNow()) === 'past';
  const when = isPast ? `At ${formatClock(freshness.heardAt, zone)}, ` : '';
  const total = counts.reduce((sum, { count }) => sum + count, 0);
  if (total === 0) {
    return (
      <Sentence under="Every read that came in is part of the history of its car or box.">
        {isPast ? `${when}nothing was set aside.` : 'Nothing is set aside.'}
      </Sentence>
    );
  }
  return (
    <Sentence under="They are kept as they came, and no car's or box's history rests on them.">
      {when}
      <Counted to={paths.setAside()}>{counted(total, 'read', 'reads')}</Counted>{' '}
      {verb(total, isPast)} set aside: <Parts counts={counts} />.
    </Sentence>
  );
}

const verb = (n: number, isPast: boolean): string =>
  n === 1 ? (isPast ? 'was' : 'is') : isPast ? 'were' : 'are';

function Parts({ counts }: Pick<Props, 'counts'>) {
  const ordered = reasonOrder.flatMap((code) => counts.filter((part) => part.code === code));
  return ordered.map(({ code, count }, place) => (
    <Fragment key={code}>
      {place === 0 ? '' : place === ordered.length - 1 ? ' and ' : ', '}
      <Counted to={paths.setAside({ code })}>
        {ordered.length === 1 && count > 1 ? 'all' : count.toLocaleString('en-US')}
      </Counted>{' '}
      {reasons[code].part}
    </Fragment>
  ));
}
