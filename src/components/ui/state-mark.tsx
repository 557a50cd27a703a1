/** What a mark can say; `quiet` and `pastLimit` lie over the state. */
export interface MarkedState {
  state: 'onHand' | 'enRoute' | 'unseen';
  quiet?: boolean;
  pastLimit?: boolean;
}

const words = { onHand: 'on hand', enRoute: 'en route', unseen: 'never read' } as const;

/** The mark in words: "en route, quiet". */
export function sayState({ state, quiet, pastLimit }: MarkedState): string {
  return [words[state], quiet ? 'quiet' : '', pastLimit ? 'past its limit' : '']
    .filter(Boolean)
    .join(', ');
}

interface Props extends MarkedState {
  /** True where words beside the mark say the same. */
  decorative?: boolean;
}

/** The state of a car as a drawn mark, 30 by 14. */
export function StateMark({ decorative, state, quiet, pastLimit }: Props) {
  const marked = { state, quiet: Boolean(quiet), pastLimit: Boolean(pastLimit) };
  const attention = Boolean(quiet) || Boolean(pastLimit);
  const colour = attention ? 'text-ochre' : state === 'enRoute' ? 'text-slate' : 'text-ink';
  const named = decorative
    ? { 'aria-hidden': true }
    : { role: 'img', 'aria-label': sayState(marked) };
  return (
    <svg width="30" height="14" viewBox="0 0 30 14" className={colour} {...named}>
      <Body state={state} quiet={Boolean(quiet)} pastLimit={Boolean(pastLimit)} />
    </svg>
  );
}

function Body({ state, quiet, pastLimit }: Required<MarkedState>) {
  if (state === 'onHand') return <Standing quiet={quiet} pastLimit={pastLimit} />;
  const outline =
    state === 'enRoute' ? 'M3.7 2.7h17l5.6 4.3-5.6 4.3h-17z' : 'M3.7 2.7h22.6v8.6H3.7z';
  const broken =
    state === 'enRoute'
      ? 'M3.7 2.7h10.4l-3.8 8.6H3.7zM18.2 2.7h2.5l5.6 4.3-5.6 4.3h-6.3z'
      : 'M3.7 2.7h10.4l-3.8 8.6H3.7zM18.2 2.7h8.1v8.6H14.4z';
  return (
    <path
      d={quiet ? broken : outline}
      fill="none"
      stroke="currentColor"
      strokeWidth="1.5"
      strokeDasharray={state === 'unseen' && !quiet ? '3 2' : undefined}
    />
  );
}

function Standing({ quiet, pastLimit }: { quiet: boolean; pastLimit: boolean }) {
  return (
    <g>
      {quiet ? (
        <path d="M5 3h8.6l-3.6 7.4H5zM17 3h8v7.4H13.4z" fill="currentColor" />
      ) : (
        <path d={pastLimit ? 'M5 3h13v7.4H5z' : 'M6 3h18v7.4H6z'} fill="currentColor" />
      )}
      <path
        d={pastLimit ? 'M2 12h26M22.5 .6v11' : 'M2 12h26'}
        stroke="currentColor"
        strokeWidth={pastLimit ? 1.4 : 1}
        fill="none"
      />
    </g>
  );
}
