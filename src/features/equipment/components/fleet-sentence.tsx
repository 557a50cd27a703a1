import { Link } from 'react-router-dom';
import { Counted, Sentence } from '../../../components/ui/sentence';
import { sayDuration } from '../../../lib/durations';
import { formatClock } from '../../../lib/times';
import { paths } from '../../../lib/paths';
import { counted, sayKind } from '../../../lib/words';
import type { FleetSummary } from '../../../lib/wire';

interface Props {
  summary: FleetSummary;
  isOwner: boolean;
  seesAllSites: boolean;
  /** Set once the counts are over five minutes old: the sentence goes into the past. */
  pastSince: { at: number; zone: string } | null;
}

/** What is moving or stands, is quiet and past its limit; each number leads to its rows. */
export function FleetSentence({ summary, isOwner, seesAllSites, pastSince }: Props) {
  const was = pastSince !== null;
  if (summary.total === 0) {
    return (
      <Sentence under="They appear here once an administrator has entered them, or a reader of your sites has read them.">
        {isOwner ? 'No car or box of yours is on the register yet.' : 'Nothing has been read yet.'}
      </Sentence>
    );
  }
  return (
    <Sentence under={<Heard summary={summary} />}>
      {pastSince ? `At ${formatClock(pastSince.at, pastSince.zone)}, ` : null}
      {isOwner ? (
        <Moving summary={summary} was={was} />
      ) : (
        <Standing summary={summary} was={was} allSites={seesAllSites} />
      )}{' '}
      <Wanting summary={summary} was={was} />
    </Sentence>
  );
}

interface PartProps {
  summary: FleetSummary;
  was: boolean;
}

function Moving({ summary, was }: PartProps) {
  const { enRoute, total } = summary;
  return (
    <>
      <Counted to={paths.fleet({ state: 'enRoute' })}>
        {enRoute === 0 ? (was ? 'none' : 'None') : enRoute.toLocaleString('en-US')}
      </Counted>{' '}
      of your <Counted to={paths.fleet()}>{counted(total, ...nounOf(summary))}</Counted>{' '}
      {tense(total === 1 ? 1 : enRoute, was)} moving.
    </>
  );
}

/** Who works at sites is told what stands there: much of what left is a stranger's, and gone. */
function Standing({ summary, was, allSites }: PartProps & { allSites: boolean }) {
  const { onHand } = summary;
  const count = onHand === 0 ? (was ? 'no car or box' : 'No car or box') : null;
  return (
    <>
      <Counted to={paths.fleet({ state: 'onHand' })}>
        {count ?? counted(onHand, ...nounOf(summary))}
      </Counted>{' '}
      {was ? 'stood' : onHand < 2 ? 'stands' : 'stand'} at {allSites ? 'the' : 'your'} sites.
    </>
  );
}

/** Who has only cars, or only boxes, is told of them. */
const nounOf = ({ holds }: FleetSummary): [one: string, many: string] =>
  holds.cars === holds.boxes
    ? ['car or box', 'cars and boxes']
    : [sayKind(holds.cars ? 'car' : 'container'), sayKind(holds.cars ? 'car' : 'container', 2)];

const tense = (n: number, was: boolean): string =>
  was ? (n === 1 ? 'was' : 'were') : n === 1 ? 'is' : 'are';

function Wanting({ summary, was }: { summary: FleetSummary; was: boolean }) {
  const { quiet, pastLimit, oldestPastLimit: oldest } = summary;
  const has = was ? 'had' : pastLimit === 1 ? 'has' : 'have';
  const stood = pastLimit === 1 ? 'stood past its limit' : 'stood past their limit';
  return (
    <>
      <Counted to={paths.fleet({ quiet: 'true' })}>{quiet === 0 ? 'None' : quiet}</Counted>{' '}
      {quiet === 0 ? (was ? 'was' : 'is') : tense(quiet, was)} quiet,{' '}
      <Counted to={paths.fleet({ pastLimit: 'true' })}>
        {pastLimit === 0 ? 'none' : pastLimit}
      </Counted>{' '}
      {pastLimit === 0 ? `${was ? 'had' : 'has'} stood past its limit` : `${has} ${stood}`}
      {oldest ? (
        <>
          , the oldest{' '}
          <Counted to={paths.equipment(oldest.unitId)}>
            {sayDuration(oldest.hours * 60)} at {oldest.site.name}
          </Counted>
        </>
      ) : null}
      .
    </>
  );
}

function Heard({ summary }: { summary: FleetSummary }) {
  const { readLast24h, unseen, total } = summary;
  return (
    <>
      <b className="font-medium text-ink">{readLast24h.toLocaleString('en-US')}</b> of{' '}
      {total.toLocaleString('en-US')} {readLast24h === 1 ? 'was' : 'were'} read in the last 24 hours
      {unseen > 0 ? (
        <>
          ;{' '}
          <Link to={paths.fleet({ state: 'unseen' })} className="font-medium text-ink">
            {unseen.toLocaleString('en-US')}
          </Link>{' '}
          {unseen === 1 ? 'has' : 'have'} never been read
        </>
      ) : null}
      .
    </>
  );
}
