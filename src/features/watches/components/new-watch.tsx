import { useState } from 'react';
import { Dialog } from '../../../components/ui/dialog';
import type { Choice } from '../../../components/ui/options';
import type { FleetFilter } from '../../../lib/paths';
import type { SessionInfo, WatchKind } from '../../../lib/wire';
import { DEFAULT_WATCH_HOURS } from '../../../../server/contract/watches';
import type { WatchFormValues } from '../watch-form-values';
import { WatchForm } from './watch-form';

interface Props {
  session: SessionInfo;
  sites: readonly Choice[];
  /** What the list is narrowed to: the sentence starts from it. */
  filter?: Partial<FleetFilter>;
  /** The car whose page this is, as displayed. */
  unit?: string;
}

/** "Tell me when …" with its dialog; an owner starts from quiet, a dispatcher from standing too long. */
export function NewWatch({ session, sites, filter = {}, unit }: Props) {
  const [isOpen, setOpen] = useState(false);
  const [isSaved, setSaved] = useState(false);
  const { user } = session;
  return (
    <>
      <button
        type="button"
        className="link"
        onClick={() => {
          setSaved(false);
          setOpen(true);
        }}
      >
        Tell me when …
      </button>
      <span role="status" className="text-ink-soft">
        {isSaved ? 'You will be told.' : ''}
      </span>
      {isOpen ? (
        <Dialog heading="Ask to be told" onClose={() => setOpen(false)}>
          <WatchForm
            id={null}
            start={startingValues(session, filter, unit)}
            me={user}
            sites={sites}
            onSaved={() => {
              setOpen(false);
              setSaved(true);
            }}
          />
        </Dialog>
      ) : null}
    </>
  );
}

/** Where the sentence starts, from the page it was opened on. */
function startingValues(
  { user }: SessionInfo,
  filter: Partial<FleetFilter>,
  unit: string | undefined,
): WatchFormValues {
  const isDwell = filter.pastLimit === 'true' || !user.roles.includes('owner');
  const kind: WatchKind = isDwell && !unit && filter.quiet !== 'true' ? 'dwell' : 'quiet';
  const mark = /^[A-Za-z]{1,4}$/.test(filter.search ?? '') ? filter.search : undefined;
  return {
    kind,
    what: unit ? 'units' : mark ? 'marks' : (filter.kind ?? ''),
    named: unit ?? mark?.toUpperCase() ?? '',
    sites: filter.site ? [filter.site] : [],
    owner: '',
    hours: String(DEFAULT_WATCH_HOURS[kind]),
    includeOnHand: false,
    name: startingName(kind, unit, filter),
    tellMe: true,
    addresses: '',
  };
}

function startingName(kind: WatchKind, unit: string | undefined, filter: Partial<FleetFilter>) {
  const what = unit ?? (filter.search ? filter.search.toUpperCase() : 'Cars and boxes');
  return kind === 'quiet' ? `${what} gone quiet` : `${what} standing too long`;
}
