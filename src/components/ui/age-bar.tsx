import { formatDuration } from '../../lib/durations';

interface Props {
  minutes: number;
  /** Null: no limit is set there, and the bar is drawn against a week without a tick. */
  limitMinutes: number | null;
  /** True where the age is a lower bound: the bar is hollow, like everything reckoned. */
  isAtLeast?: boolean;
}

const width = 104;

/** Age as a bar against its limit's tick at the middle; what is past the limit is ochre and thicker. */
export function AgeBar({ minutes, limitMinutes, isAtLeast = false }: Props) {
  const full = limitMinutes ? limitMinutes * 2 : 7 * 1440;
  const x = (value: number) => Math.min(1, value / full) * width;
  const within = limitMinutes ? Math.min(minutes, limitMinutes) : minutes;
  const over = limitMinutes !== null && minutes > limitMinutes;
  const age = `${isAtLeast ? 'over ' : ''}${formatDuration(minutes)}`;
  const said = limitMinutes
    ? `${age} of ${formatDuration(limitMinutes)} allowed`
    : `${age}, no limit set`;
  return (
    <svg width={width} height="14" viewBox={`0 0 ${width} 14`} role="img" aria-label={said}>
      <path d={`M0 10.5h${width}`} className="stroke-rule-strong" />
      <rect
        x=".5"
        y="5"
        width={Math.max(2, x(within))}
        height="4"
        className={`stroke-stock ${isAtLeast ? 'fill-sheet' : 'fill-stock'}`}
        strokeWidth={isAtLeast ? 1 : 0}
      />
      {over ? (
        <rect
          x={width / 2}
          y="4"
          width={Math.max(2, x(minutes) - width / 2)}
          height="5.5"
          className={`stroke-ochre ${isAtLeast ? 'fill-sheet' : 'fill-ochre'}`}
          strokeWidth={isAtLeast ? 1 : 0}
        />
      ) : null}
      {limitMinutes ? (
        <path d={`M${width / 2} 1.5v11`} className="stroke-ink" strokeWidth="1.4" />
      ) : null}
    </svg>
  );
}
