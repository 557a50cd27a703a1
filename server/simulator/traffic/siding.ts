import { between } from '../random.js';
import { stopsAhead } from './consist.js';
import type { Operations } from './operations.js';
import { HOUR } from './stock.js';
import type { Train } from './train-run.js';

/** Share of departures after which one car is left on a siding before the next reader. */
const LEFT_BEHIND = 0.17;
/** Hours that it stays there: long enough to go quiet. */
const LEFT_HOURS: [number, number] = [70, 190];

/** Now and then leaves a car on a siding: nobody reads it until a later train takes it on. */
export function leaveOnSiding(operations: Operations, train: Train, at: number): void {
  const { random, sidings } = operations;
  if (train.turn.carries !== 'cars' || train.cars.length < 6) return;
  if (random() >= LEFT_BEHIND) return;
  const [riding] = train.cars.splice(Math.floor(random() * train.cars.length), 1);
  if (!riding) return;
  const left = sidings.get(stretchOf(train)) ?? [];
  left.push({ riding, readyAt: at + between(random, ...LEFT_HOURS) * HOUR });
  sidings.set(stretchOf(train), left);
}

/** Takes on the cars that wait on this stretch for a train that serves where they go. */
export function takeFromSiding(operations: Operations, train: Train, at: number): void {
  const { sidings } = operations;
  const waiting = sidings.get(stretchOf(train));
  if (!waiting || train.turn.carries !== 'cars') return;
  const ahead = stopsAhead(train);
  const taken = waiting.filter(
    ({ riding, readyAt }) => readyAt <= at && ahead.includes(riding.getOff),
  );
  train.cars.push(...taken.map(({ riding }) => riding));
  sidings.set(
    stretchOf(train),
    waiting.filter((each) => !taken.includes(each)),
  );
}

/** The stretch of line that the train has just come out to. */
function stretchOf({ path, index }: Train): string {
  return path.slice(index, index + 2).join(' ');
}
