import { useEffect, useId, useRef } from 'react';
import { Mark } from '../../../components/ui/mark';
import { sayReason } from '../../../components/ui/notice';
import { usePreferences } from '../../../lib/preferences';
import type { LookUpHit } from '../../../lib/wire';
import { useLookUp } from '../use-look-up';

/** The one look-up field: a number alone is enough, `/` goes to it, Enter opens a single hit. */
export function LookUpField({ onDone = () => undefined }: { onDone?: () => void }) {
  const input = useRef<HTMLInputElement>(null);
  const id = useId();
  const look = useLookUp(() => {
    input.current?.blur();
    onDone();
  });
  useSlashKey(input);
  return (
    <div
      className="relative min-w-0 flex-1 lg:max-w-[480px]"
      onBlur={(event) => {
        if (!event.currentTarget.contains(event.relatedTarget)) look.close();
      }}
    >
      <label htmlFor={id} className="only-heard">
        Look up a car, box or site
      </label>
      <input
        ref={input}
        id={id}
        className="h-32 w-full rounded border border-on-creosote-soft bg-transparent pl-12 pr-36 text-table text-on-creosote placeholder:text-on-creosote-soft"
        placeholder="Mark and number, box or site"
        role="combobox"
        aria-expanded={look.isOpen}
        aria-controls={`${id}-hits`}
        aria-autocomplete="list"
        aria-activedescendant={look.chosen >= 0 ? `${id}-${look.chosen}` : undefined}
        autoComplete="off"
        autoCapitalize="characters"
        spellCheck={false}
        enterKeyHint="search"
        value={look.typed}
        onChange={(event) => look.onType(event.target.value)}
        onKeyDown={look.onKeyDown}
      />
      <kbd
        aria-hidden="true"
        className="pointer-events-none absolute right-8 top-[7px] hidden text-on-creosote-soft lg:inline"
      >
        /
      </kbd>
      <div
        hidden={!look.isOpen}
        className="absolute inset-x-0 top-full z-[1100] mt-4 border border-rule-strong bg-sheet text-ink"
      >
        <ul
          id={`${id}-hits`}
          role="listbox"
          aria-label="What was found"
          className="max-h-[320px] overflow-auto"
        >
          {look.hits.map((hit, index) => (
            <Hit
              key={`${hit.kind}-${hit.id}`}
              id={`${id}-${index}`}
              hit={hit}
              isChosen={index === look.chosen}
              onPick={() => look.goTo(hit)}
            />
          ))}
        </ul>
        <p role="status" className="px-12 text-table empty:hidden">
          <Answer look={look} />
        </p>
      </div>
    </div>
  );
}

function Hit(props: { id: string; hit: LookUpHit; isChosen: boolean; onPick: () => void }) {
  const { id, hit, isChosen, onPick } = props;
  return (
    <li
      id={id}
      role="option"
      aria-selected={isChosen}
      className={`flex min-h-36 cursor-pointer items-center justify-between gap-12 border-b border-rule px-12 text-table hover:bg-wash-verdigris ${isChosen ? 'bg-wash-verdigris' : ''}`}
      onPointerDown={(event) => event.preventDefault()}
      onClick={onPick}
    >
      <Named hit={hit} />
      <span className="truncate font-condensed text-ink-soft">{hit.detail}</span>
    </li>
  );
}

/** "QTKX 40127, now QBLX 77" where the number is one that it carried once. */
function Named({ hit }: { hit: LookUpHit }) {
  if (hit.kind === 'site') return <span>{hit.display}</span>;
  if (hit.formerly === null) return <Mark>{hit.display}</Mark>;
  return (
    <span className="flex-none">
      <Mark>{hit.formerly}</Mark>, now <Mark>{hit.display}</Mark>
    </span>
  );
}

function Answer({ look }: { look: ReturnType<typeof useLookUp> }) {
  const said = look.error
    ? sayReason(look.error)
    : (look.problem ??
      (look.hits.length === 0 && !look.isAsking
        ? 'Nothing you may see has that number or name.'
        : null));
  return said ? <span className="block py-8">{said}</span> : null;
}

function useSlashKey(input: React.RefObject<HTMLInputElement | null>) {
  const { singleKeys } = usePreferences();
  useEffect(() => {
    if (singleKeys === 'off') return;
    const onKey = (event: KeyboardEvent) => {
      const target = event.target as HTMLElement | null;
      const isTyping = target?.closest('input, textarea, select, [contenteditable], dialog');
      if (event.key !== '/' || isTyping || event.ctrlKey || event.metaKey || event.altKey) return;
      event.preventDefault();
      input.current?.focus();
    };
    document.addEventListener('keydown', onKey);
    return () => document.removeEventListener('keydown', onKey);
  }, [input, singleKeys]);
}
