import type { RebuildView } from '../../lib/wire';

/** "37 %", never 100 before it is done. */
export const sayShare = ({ state, doneShare }: RebuildView): string =>
  `${state === 'done' ? 100 : Math.min(99, Math.floor(doneShare * 100))} %`;

const words: Record<RebuildView['state'], string> = {
  waiting: 'waits',
  running: 'under way',
  stopped: 'stopped',
  done: 'done',
};

/** Its state in a word. */
export const sayState = ({ state }: RebuildView): string => words[state];

/** Who or what asked for it. */
export function sayCause({ cause, requestedBy }: RebuildView): string {
  if (cause === 'command') return 'by command';
  return requestedBy === null ? '' : `by ${requestedBy.name}`;
}
