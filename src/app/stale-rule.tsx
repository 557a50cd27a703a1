import { ageWord, useFreshness } from '../lib/live';
import { useNow } from '../lib/use-now';

/** An ochre rule under the header once what stands here is over a minute old. */
export function StaleRule() {
  const isFresh = ageWord(useFreshness(), useNow()) === 'fresh';
  return <div aria-hidden="true" className={isFresh ? 'hidden' : 'h-[3px] flex-none bg-ochre'} />;
}
