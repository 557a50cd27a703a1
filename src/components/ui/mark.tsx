import { useState } from 'react';

/** A car's or box's number in Mono, as it stands painted. */
export function Mark({ children }: { children: string }) {
  return <span className="mono text-[0.8125rem]">{children}</span>;
}

/** The mark at the head of its own page, with a word to copy it. */
export function LargeMark({ children }: { children: string }) {
  const [copied, setCopied] = useState(false);
  const copy = async () => {
    await navigator.clipboard.writeText(children);
    setCopied(true);
  };
  return (
    <span className="flex flex-wrap items-baseline gap-x-16">
      <span className="font-mono text-[1.75rem] leading-[2.75rem] whitespace-nowrap sm:text-mark">
        {children}
      </span>
      <button
        type="button"
        className="link font-sans text-table font-normal text-ink-soft print:hidden"
        onClick={() => void copy()}
      >
        {copied ? 'copied' : 'copy'}
      </button>
    </span>
  );
}
