import { useRef } from 'react';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { Button } from '../../../components/ui/button';
import { ChoiceRow } from '../../../components/ui/choice-row';
import { Fault } from '../../../components/ui/fault';
import { Field } from '../../../components/ui/field';
import { sayReason } from '../../../components/ui/notice';
import { SelectField } from '../../../components/ui/select-field';
import { TrackCaution } from '../../../components/ui/track-caution';
import { ApiProblem } from '../../../lib/api-problem';
import { makeId } from '../../../lib/make-id';
import type { EquipmentDetail, Named } from '../../../lib/wire';
import { sendHandReport } from '../api/send-hand-report';
import type { EyeReport } from '../api/send-hand-report';

interface Props {
  unit: EquipmentDetail;
  sites: Named[];
  onSent: (report: EyeReport) => void;
}

interface Values {
  seen: 'yes' | 'no';
  site: string;
  track: string;
}

const choices = [
  { value: 'yes', label: 'stands there' },
  { value: 'no', label: 'is not there' },
] as const;

/** What was seen just now: the car there or not, at which site, on which track. */
export function EyeReportForm({ unit, sites, onSent }: Props) {
  const form = useForm<Values>({ defaultValues: startAt(unit, sites) });
  const makeReport = useReport(unit.unitId);
  const client = useQueryClient();
  const send = useMutation({
    mutationFn: async (values: Values) => {
      const report = makeReport(values);
      await sendHandReport(report);
      return report;
    },
    onSuccess: async (report) => {
      onSent(report);
      await client.invalidateQueries({ queryKey: ['unit', unit.unitId] });
    },
    onError: (error) => {
      const fault = error instanceof ApiProblem && error.faults.find(isOfTrack);
      if (fault) form.setError('track', { message: fault.detail });
    },
  });
  const submit = form.handleSubmit((values) => send.mutate(values));
  return (
    <form noValidate className="flex flex-col gap-16" onSubmit={(event) => void submit(event)}>
      <TrackCaution />
      <ChoiceRow
        label={unit.kind === 'container' ? 'The box' : 'The car'}
        value={form.watch('seen')}
        choices={choices}
        onChoose={(seen) => form.setValue('seen', seen)}
      />
      <SelectField
        label="Site"
        choices={sites.map(({ code, name }) => ({ value: code, label: name }))}
        {...form.register('site')}
      />
      <Field
        label="Track"
        maxLength={40}
        hint="As the yard calls it; leave it empty where there is none."
        autoComplete="off"
        fault={form.formState.errors.track?.message ?? null}
        {...form.register('track')}
      />
      <div role="alert">
        <Fault text={send.isError ? sayReason(send.error) : null} />
      </div>
      <div className="flex flex-wrap items-center gap-x-20 gap-y-8">
        <Button kind="main" type="submit" busy={send.isPending}>
          Report it as of now
        </Button>
      </div>
    </form>
  );
}

const isOfTrack = ({ pointer }: { pointer: string }): boolean => pointer === '/track';

/** Where it is thought to be, when that is a site of the person's. */
function startAt({ lastSeen, state }: EquipmentDetail, sites: Named[]): Values {
  const known = sites.find(({ code }) => code === lastSeen?.site?.code);
  const track = known && state === 'onHand' ? (lastSeen?.track ?? '') : '';
  return { seen: 'yes', site: known?.code ?? sites[0]?.code ?? '', track };
}

/** A report of these values; the same one for another try with the same values, so that it counts once. */
function useReport(unit: string): (values: Values) => EyeReport {
  const last = useRef<{ text: string; report: EyeReport } | null>(null);
  return (values) => {
    const text = JSON.stringify(values);
    if (last.current?.text === text) return last.current.report;
    const { site, track, seen } = values;
    const at = new Date().toISOString();
    const report = { id: makeId(), unit, site, track, seen: seen === 'yes', at };
    last.current = { text, report };
    return report;
  };
}
