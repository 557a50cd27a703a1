import { Sentence } from '../../../components/ui/sentence';
import { counted, listed } from '../../../lib/words';
import type { DoubtsAnswer } from '../../../lib/wire';

/** How many sightings fit no train, and whose clock may be wrong. */
export function DoubtsSentence({ counts }: { counts: DoubtsAnswer['counts'] }) {
  const { doubts, units, clocks } = counts;
  if (doubts === 0) {
    return (
      <Sentence under="Each sighting of the last 30 days can be joined to the one before it.">
        No sighting is in doubt.
      </Sentence>
    );
  }
  return (
    <Sentence under="No train could have made them after the sighting before. They are kept, and moved nothing.">
      <b className="font-medium">{counted(doubts, 'sighting', 'sightings')}</b> of{' '}
      {counted(units, 'car or box', 'cars and boxes')} in the last 30 days{' '}
      {doubts === 1 ? 'fits' : 'fit'} no train.
      {clocks.length > 0 ? ` ${sayClocks(clocks)}` : null}
    </Sentence>
  );
}

function sayClocks(clocks: DoubtsAnswer['counts']['clocks']): string {
  const sites = listed(clocks.map(({ name, units }) => `${name} (${units})`));
  return clocks.length === 1
    ? `The clock at ${sites} may be wrong.`
    : `The clocks at ${sites} may be wrong.`;
}
