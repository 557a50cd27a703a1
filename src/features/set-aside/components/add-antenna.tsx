import { useMutation, useQuery } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { Button } from '../../../components/ui/button';
import { Dialog } from '../../../components/ui/dialog';
import { Fault } from '../../../components/ui/fault';
import { Field } from '../../../components/ui/field';
import { EmptyNotice, ErrorNotice, LoadingRows, sayReason } from '../../../components/ui/notice';
import { SelectField } from '../../../components/ui/select-field';
import { ApiProblem } from '../../../lib/api-problem';
import type { HeldGroupView, ReadPointView } from '../../../lib/wire';
import { antennaInput } from '../../../../server/contract/administration';
import { addAntenna } from '../api/add-antenna';
import { readPointsQuery } from '../api/read-points';

interface Props {
  group: HeldGroupView;
  onClose: () => void;
  onDone: (says: string) => void;
}

/** Adds the antenna that a reader has named, to one of its site's read points. */
export function AddAntenna({ group, onClose, onDone }: Props) {
  const readPoints = useQuery(readPointsQuery(group.site.code));
  return (
    <Dialog heading={`Add an antenna at ${group.site.name}`} onClose={onClose}>
      {readPoints.isPending ? <LoadingRows of="the read points" rows={3} /> : null}
      {readPoints.isError ? (
        <ErrorNotice
          what="The read points did not come"
          error={readPoints.error}
          onRetry={() => void readPoints.refetch()}
        />
      ) : null}
      {readPoints.data?.length === 0 ? (
        <EmptyNotice says="This site has no read point yet.">
          An antenna belongs to one: enter the read point first.
        </EmptyNotice>
      ) : null}
      {readPoints.data && readPoints.data.length > 0 ? (
        <AntennaForm group={group} readPoints={readPoints.data} onDone={onDone} />
      ) : null}
    </Dialog>
  );
}

interface Values {
  number: string;
  readPoint: string;
  offsetM: string;
  side: string;
}

interface FormProps {
  group: HeldGroupView;
  readPoints: ReadPointView[];
  onDone: (says: string) => void;
}

function AntennaForm({ group, readPoints, onDone }: FormProps) {
  const form = useForm<Values>({
    defaultValues: {
      number: String(group.antennas[0] ?? ''),
      readPoint: readPoints[0]?.code ?? '',
      offsetM: '',
      side: '',
    },
  });
  const fault = (pointer: string, message: string) =>
    form.setError(nameOf(pointer.replace(/^\//, '')), { message });
  const save = useMutation({
    mutationFn: addAntenna,
    onSuccess: (_answer, { number }) =>
      onDone(
        `Antenna ${number} of ${group.site.name} is added. Its reads are gone through again, which takes a moment.`,
      ),
    onError: (error) => {
      if (!(error instanceof ApiProblem)) return;
      for (const { pointer, detail } of error.faults) fault(pointer, detail);
    },
  });
  const submit = form.handleSubmit((values) => {
    const offset = values.offsetM.trim();
    const checked = antennaInput.safeParse({
      ...values,
      site: group.site.code,
      number: Number(values.number),
      offsetM: offset === '' ? Number.NaN : Number(offset),
    });
    if (checked.success) return save.mutate(checked.data);
    for (const { path } of checked.error.issues) fault(String(path[0]), wrong(String(path[0])));
  });
  const { errors } = form.formState;
  return (
    <form noValidate className="flex flex-col gap-16" onSubmit={(event) => void submit(event)}>
      <SelectField
        label="Number"
        hint="As the reader gives it."
        choices={group.antennas.map((number) => ({ value: String(number), label: String(number) }))}
        fault={errors.number?.message ?? null}
        {...form.register('number')}
      />
      <SelectField
        label="Read point"
        choices={readPoints.map(({ code, name, track }) => ({
          value: code,
          label: track ? `${name}, ${track}` : name,
        }))}
        fault={errors.readPoint?.message ?? null}
        {...form.register('readPoint')}
      />
      <Field
        label="Offset along the track, m"
        hint="It grows in the increasing direction; what counts is the distance to the other antennas."
        inputMode="numeric"
        fault={errors.offsetM?.message ?? null}
        {...form.register('offsetM')}
      />
      <SelectField
        label="Side of the track"
        hint="Told as for the other antennas of this read point."
        choices={[
          { value: '', label: 'choose one' },
          { value: 'left', label: 'left' },
          { value: 'right', label: 'right' },
        ]}
        fault={errors.side?.message ?? null}
        {...form.register('side')}
      />
      <div role="alert">
        <Fault text={save.isError ? sayReason(save.error) : null} />
      </div>
      <div>
        <Button kind="main" type="submit" busy={save.isPending}>
          Add the antenna
        </Button>
      </div>
    </form>
  );
}

const words: Record<keyof Values, string> = {
  number: 'A number from 1 to 255 is wanted.',
  readPoint: 'A read point of this site is wanted.',
  offsetM: 'Metres are wanted, from −10,000 to 10,000.',
  side: 'Which side is wanted.',
};

const wrong = (name: string): string => words[nameOf(name)];

/** The field a fault belongs to. */
function nameOf(text: string): keyof Values {
  return text === 'readPoint' || text === 'offsetM' || text === 'side' ? text : 'number';
}
