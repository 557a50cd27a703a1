import { useDeferredValue } from 'react';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useForm, useWatch } from 'react-hook-form';
import { Button } from '../../../components/ui/button';
import { Fault } from '../../../components/ui/fault';
import { Field } from '../../../components/ui/field';
import { sayReason } from '../../../components/ui/notice';
import type { Choice } from '../../../components/ui/options';
import { ApiProblem } from '../../../lib/api-problem';
import type { WatchInput } from '../../../lib/wire';
import { saveWatch } from '../api/save-watch';
import { blankOf, checkWatch } from '../watch-form-values';
import type { WatchFormValues } from '../watch-form-values';
import { WatchPreview } from './watch-preview';
import { WatchSentence } from './watch-sentence';

interface Props {
  /** Null: a new watch. */
  id: number | null;
  start: WatchFormValues;
  me: { id: number; email: string };
  sites: readonly Choice[];
  onSaved: () => void;
}

/** The sentence with blanks, what it would raise, who is told, and the one act. */
export function WatchForm({ id, start, me, sites, onSaved }: Props) {
  const form = useForm<WatchFormValues>({ defaultValues: start });
  const client = useQueryClient();
  const save = useMutation({
    mutationFn: (input: WatchInput) => saveWatch(id, input),
    onSuccess: async () => {
      onSaved();
      await Promise.all(
        ['watches', 'alerts'].map((key) => client.invalidateQueries({ queryKey: [key] })),
      );
    },
    onError: (error) => showFaults(error),
  });
  const showFaults = (error: unknown) => {
    if (!(error instanceof ApiProblem)) return;
    for (const { pointer, detail } of error.faults) {
      form.setError(blankOf(pointer.split('/').slice(1)), { message: detail });
    }
  };
  const submit = form.handleSubmit((values) => {
    const checked = checkWatch(values, me.id);
    if ('input' in checked) return save.mutate(checked.input);
    for (const [name, message] of Object.entries(checked.faults)) {
      form.setError(name as keyof WatchFormValues, { message });
    }
  });
  const { errors } = form.formState;
  return (
    <form noValidate className="flex flex-col gap-16" onSubmit={(event) => void submit(event)}>
      <WatchSentence form={form} sites={sites} canChooseKind={id === null} />
      <Preview form={form} me={me.id} />
      <Recipients form={form} email={me.email} />
      <Field
        label="Name of this watch"
        hint="It stands in the subject of the mail."
        fault={errors.name?.message ?? null}
        {...form.register('name')}
      />
      <div role="alert">
        <Fault text={save.isError ? sayReason(save.error) : null} />
      </div>
      <div>
        <Button kind="main" type="submit" busy={save.isPending}>
          {id === null ? 'Tell me' : 'Keep these changes'}
        </Button>
      </div>
    </form>
  );
}

type Form = ReturnType<typeof useForm<WatchFormValues>>;

function Recipients({ form, email }: { form: Form; email: string }) {
  const { errors } = form.formState;
  return (
    <fieldset className="flex flex-col gap-8">
      <legend className="pb-4 text-table font-medium">Mail goes to</legend>
      <label className="flex min-h-24 items-center gap-8 text-table">
        <input type="checkbox" className="accent-verdigris" {...form.register('tellMe')} />
        me, {email}
      </label>
      <Field
        label="and to these addresses"
        placeholder="none"
        fault={errors.addresses?.message ?? errors.tellMe?.message ?? null}
        {...form.register('addresses')}
      />
    </fieldset>
  );
}

function Preview({ form, me }: { form: Form; me: number }) {
  const values = useDeferredValue(useWatch({ control: form.control }) as WatchFormValues);
  const checked = checkWatch({ ...values, name: 'preview', addresses: '', tellMe: true }, me);
  if (!('input' in checked)) return <WatchPreview input={null} />;
  const { kind, scope, includeOnHand, hours } = checked.input;
  return <WatchPreview input={{ kind, scope, includeOnHand, hours }} />;
}
