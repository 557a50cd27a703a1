import { useMutation } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { Button } from '../../../components/ui/button';
import { Dialog } from '../../../components/ui/dialog';
import { Fault } from '../../../components/ui/fault';
import { Field } from '../../../components/ui/field';
import { sayReason } from '../../../components/ui/notice';
import { SelectField } from '../../../components/ui/select-field';
import { ApiProblem } from '../../../lib/api-problem';
import { formatInstantInFull } from '../../../lib/times';
import type { HeldTagView } from '../../../lib/wire';
import { parseUnit } from '../../../../server/domain/identifiers/parse-unit';
import { putTag } from '../api/put-tag';

interface Props {
  tag: HeldTagView;
  zone: string;
  onClose: () => void;
  onDone: (says: string) => void;
}

interface Values {
  unit: string;
  side: '' | 'left' | 'right';
}

/** Says which car or box of the register wears a tag, from its first read on that is set aside. */
export function PutTagOn({ tag, zone, onClose, onDone }: Props) {
  const form = useForm<Values>({ defaultValues: { unit: '', side: '' } });
  const save = useMutation({
    mutationFn: ({ unitId, side }: { unitId: string; side: Values['side'] }) =>
      putTag(unitId, { value: tag.tag, side: side || null, validFrom: tag.oldestAt }),
    onSuccess: () =>
      onDone(
        `${form.getValues('unit')} wears the tag now. Its reads are gone through again, which takes a moment.`,
      ),
    onError: (error) => {
      if (!(error instanceof ApiProblem) || error.status !== 404) return;
      form.setError('unit', { message: 'It is not on the register. Enter it there first.' });
    },
  });
  const submit = form.handleSubmit(({ unit, side }) => {
    const parsed = parseUnit(unit);
    if (parsed.kind === 'unit') return save.mutate({ unitId: parsed.identity.compact, side });
    form.setError('unit', { message: 'This is no mark and number of a car or box.' });
  });
  const { errors } = form.formState;
  return (
    <Dialog heading="Say what wears this tag" onClose={onClose}>
      <form noValidate className="flex flex-col gap-16" onSubmit={(event) => void submit(event)}>
        <p>
          <span className="mono text-note break-all whitespace-normal">{tag.tag}</span>
          <span className="block text-ink-soft">
            It counts as worn since{' '}
            <span className="mono whitespace-normal">
              {formatInstantInFull(tag.oldestAt, zone)}
            </span>
            , its first read that is set aside.
          </span>
        </p>
        <Field
          label="Car or box"
          placeholder="QTKX 40127"
          autoComplete="off"
          data-begin
          fault={errors.unit?.message ?? null}
          {...form.register('unit')}
        />
        <SelectField
          label="Side"
          choices={[
            { value: '', label: 'not known' },
            { value: 'left', label: 'left' },
            { value: 'right', label: 'right' },
          ]}
          {...form.register('side')}
        />
        <div role="alert">
          <Fault text={save.isError && !errors.unit ? saySaveFault(save.error) : null} />
        </div>
        <div>
          <Button kind="main" type="submit" busy={save.isPending}>
            Put it on
          </Button>
        </div>
      </form>
    </Dialog>
  );
}

/** What the server has against the tag itself, for it is not a field here. */
function saySaveFault(error: unknown): string {
  const faults = error instanceof ApiProblem ? error.faults : [];
  if (faults.length === 0) return sayReason(error);
  return faults.map(({ detail }) => `The tag ${detail}.`).join(' ');
}
