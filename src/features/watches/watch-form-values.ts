import { z } from 'zod';
import { WATCH_LIMITS, watchInput, watchKinds } from '../../../server/contract/watches';
import { parseUnit } from '../../../server/domain/identifiers/parse-unit';
import type { WatchInput, WatchView } from '../../lib/wire';

/** What the blanks of the sentence hold, as typed. */
export const watchFormSchema = z.object({
  kind: z.enum(watchKinds),
  /** A kind of the contract, '' for any car or box, 'units' or 'marks' with the text beside it. */
  what: z.string(),
  named: z.string(),
  sites: z.array(z.string()),
  owner: z.string(),
  hours: z.string(),
  includeOnHand: z.boolean(),
  name: z.string(),
  tellMe: z.boolean(),
  addresses: z.string(),
});
export type WatchFormValues = z.infer<typeof watchFormSchema>;

const hoursFault = `a number from 1 to ${WATCH_LIMITS.hours.toLocaleString('en-US')}`;

const parts = (text: string): string[] =>
  text
    .split(/[\n,;]+/)
    .map((part) => part.trim())
    .filter(Boolean);

/** Compact identities of what was typed; a text that names none is kept, for the server to answer. */
const unitIds = (text: string): string[] =>
  parts(text).map((part) => {
    const parsed = parseUnit(part);
    return parsed.kind === 'unit' ? parsed.identity.compact : part;
  });

/** The watch that the blanks ask for; `me` is the person's id. May still fail the contract's own check. */
export function toWatchInput(values: WatchFormValues, me: number): Record<string, unknown> {
  const { what, named, sites, kind, owner } = values;
  const kinds = what !== '' && what !== 'units' && what !== 'marks' ? [what] : undefined;
  return {
    name: values.name.trim(),
    kind,
    scope: {
      ...(what === 'units' && { units: unitIds(named) }),
      ...(what === 'marks' && { marks: parts(named).map((mark) => mark.toUpperCase()) }),
      ...(kinds && { kinds }),
      ...(owner && { owners: [Number(owner)] }),
      ...(sites.length > 0 && { sites }),
    },
    includeOnHand: kind === 'quiet' && values.includeOnHand,
    hours: values.hours.trim() === '' ? undefined : Number(values.hours),
    recipients: { people: values.tellMe ? [me] : [], addresses: parts(values.addresses) },
    schedule: { at: 'once' },
  };
}

/** The contract's check: the watch, or each fault by the blank it belongs to. */
export function checkWatch(
  values: WatchFormValues,
  me: number,
): { input: WatchInput } | { faults: Partial<Record<keyof WatchFormValues, string>> } {
  const result = watchInput.safeParse(toWatchInput(values, me));
  if (result.success) {
    if (values.tellMe || values.addresses.trim() !== '') return { input: result.data };
    return { faults: { addresses: 'Someone has to be told: you, or an address.' } };
  }
  const faults: Partial<Record<keyof WatchFormValues, string>> = {};
  for (const issue of result.error.issues) {
    const blank = blankOf(issue.path.map(String));
    faults[blank] ??= blank === 'hours' ? hoursFault : issue.message;
  }
  return { faults };
}

/** The blank that a fault's path, or the server's pointer, belongs to. */
export function blankOf([first, second]: string[]): keyof WatchFormValues {
  if (first === 'scope')
    return second === 'sites' ? 'sites' : second === 'kinds' ? 'what' : 'named';
  if (first === 'recipients') return second === 'people' ? 'tellMe' : 'addresses';
  if (first === 'hours' || first === 'kind' || first === 'includeOnHand') return first;
  return 'name';
}

/** The blanks of a watch that exists. */
export function toFormValues(watch: WatchView, me: number): WatchFormValues {
  const { scope, recipients, named } = watch;
  return {
    kind: watch.kind,
    what: scope.units ? 'units' : scope.marks ? 'marks' : (scope.kinds?.[0] ?? ''),
    named: scope.units
      ? named.units.map(({ display }) => display).join(', ')
      : (scope.marks ?? []).join(', '),
    sites: scope.sites ?? [],
    owner: String(scope.owners?.[0] ?? ''),
    hours: String(watch.hours),
    includeOnHand: watch.includeOnHand,
    name: watch.name,
    tellMe: recipients.people.includes(me),
    addresses: recipients.addresses.join(', '),
  };
}
