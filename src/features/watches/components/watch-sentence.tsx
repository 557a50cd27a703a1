import type { FieldErrors, UseFormReturn } from 'react-hook-form';
import { Fault } from '../../../components/ui/fault';
import { Options } from '../../../components/ui/options';
import type { Choice } from '../../../components/ui/options';
import { capital, kindNames, sayKind } from '../../../lib/words';
import type { WatchFormValues } from '../watch-form-values';
import { SiteBlank } from './site-blank';

interface Props {
  form: UseFormReturn<WatchFormValues>;
  sites: readonly Choice[];
  /** False where the watch exists: its kind stays. */
  canChooseKind: boolean;
}

const kindChoices: Choice[] = [
  { value: 'quiet', label: 'has not been read for' },
  { value: 'dwell', label: 'has stood over' },
];

const whatChoices: Choice[] = [
  { value: '', label: 'any car or box' },
  ...kindNames
    .filter((kind) => kind !== 'endOfTrain' && kind !== 'other')
    .map((kind) => ({ value: kind, label: `any ${sayKind(kind)}` })),
  { value: 'marks', label: 'anything marked' },
  { value: 'units', label: 'one of these:' },
];

/** The watch as a sentence with blanks. */
export function WatchSentence({ form, sites, canChooseKind }: Props) {
  const { register, watch, formState } = form;
  const [kind, what] = watch(['kind', 'what']);
  const isNamed = what === 'marks' || what === 'units';
  const { errors } = formState;
  return (
    <div className="flex flex-col gap-8">
      <p className="text-lead leading-[2.6]">
        Tell me when{' '}
        <select className="blank" aria-label="What to watch" {...register('what')}>
          <Options choices={whatChoices} />
        </select>{' '}
        {isNamed ? (
          <input
            className="blank mono w-[220px]"
            aria-label={what === 'marks' ? 'Marks' : 'Cars and boxes'}
            placeholder={what === 'marks' ? 'QTKX, QBLX' : 'QTKX 40127, …'}
            aria-invalid={errors.named ? true : undefined}
            {...register('named')}
          />
        ) : null}{' '}
        {canChooseKind ? (
          <select className="blank" aria-label="What to look for" {...register('kind')}>
            <Options choices={kindChoices} />
          </select>
        ) : (
          kindChoices.find(({ value }) => value === kind)?.label
        )}{' '}
        <input
          className="blank w-[64px] text-right"
          aria-label="Hours"
          inputMode="decimal"
          aria-invalid={errors.hours ? true : undefined}
          {...register('hours')}
        />{' '}
        hours{kind === 'dwell' ? ' at ' : ', last read at '}
        <SiteBlank form={form} sites={sites} />
      </p>
      {kind === 'quiet' ? (
        <label className="flex min-h-24 items-center gap-8 text-table">
          <input type="checkbox" className="accent-verdigris" {...register('includeOnHand')} />
          also while it stands at a site
        </label>
      ) : null}
      <Faults errors={errors} />
    </div>
  );
}

const named: Partial<Record<keyof WatchFormValues, string>> = {
  hours: 'hours',
  named: 'numbers or marks',
  sites: 'sites',
  what: 'what to watch',
};

function Faults({ errors }: { errors: FieldErrors<WatchFormValues> }) {
  return Object.entries(named).map(([name, word]) => {
    const message = errors[name as keyof WatchFormValues]?.message;
    return <Fault key={name} text={message ? `${capital(word)}: ${message}` : null} />;
  });
}
