import type { ReactNode } from 'react';
import { ApiProblem } from '../../lib/api-problem';
import { Button } from './button';

/** Nothing here, and what follows from it; `children` holds the next step. */
export function EmptyNotice({ says, children }: { says: ReactNode; children?: ReactNode }) {
  return (
    <div className="border-y border-rule py-20">
      <p className="text-lead">{says}</p>
      {children ? <div className="mt-8 max-w-[60ch] text-ink-soft">{children}</div> : null}
    </div>
  );
}

/** The shape of rows that are on their way; says so to those who cannot see it. */
export function LoadingRows({ rows = 12, of }: { rows?: number; of: string }) {
  return (
    <div role="status" className="flex">
      <span className="only-heard">Fetching {of}.</span>
      <div aria-hidden="true" className="w-48 border-r-[3px] border-double border-rule-strong" />
      <div aria-hidden="true" className="flex-1">
        {Array.from({ length: rows }, (_, row) => (
          <div
            key={row}
            className={`h-[var(--row)] border-b ${row % 5 === 4 ? 'border-rule-strong' : 'border-rule'}`}
          />
        ))}
      </div>
    </div>
  );
}

/** The shape of a sentence that is on its way. */
export function LoadingSentence() {
  return (
    <div className="inset pt-20" role="status">
      <span className="only-heard">Reckoning.</span>
      <div aria-hidden="true" className="loading-shape h-[37px] max-w-[820px]" />
      <div aria-hidden="true" className="loading-shape h-[37px] max-w-[520px]" />
    </div>
  );
}

interface ErrorProps {
  /** What failed, as a clause: "The list did not come". */
  what: string;
  error: unknown;
  /** Absent where another try would answer the same. */
  onRetry?: () => void;
}

/** What failed, whether anything was lost, a retry, and the request id to quote. */
export function ErrorNotice({ what, error, onRetry }: ErrorProps) {
  const problem = error instanceof ApiProblem ? error : null;
  return (
    <div role="alert" className="border-l-[3px] border-oxide bg-wash-oxide px-16 py-12">
      <p className="font-medium">{what}.</p>
      <p className="text-table">{sayReason(error)}</p>
      <div className="mt-8 flex flex-wrap items-center gap-x-20 gap-y-8">
        {onRetry ? <Button onClick={onRetry}>Try again</Button> : null}
        {problem?.requestId ? (
          <span className="text-note text-ink-soft">
            Request <span className="mono">{problem.requestId}</span>
          </span>
        ) : null}
      </div>
    </div>
  );
}

/** The reason of a failed request in words for a person. */
export function sayReason(error: unknown): string {
  if (!(error instanceof ApiProblem))
    return error instanceof Error ? error.message : 'Unknown fault.';
  if (error.status === 0) return 'No answer came. Your link may have dropped; nothing was changed.';
  if (error.retryAfterSeconds)
    return `${error.message} Try again in ${error.retryAfterSeconds} seconds.`;
  return error.message;
}
