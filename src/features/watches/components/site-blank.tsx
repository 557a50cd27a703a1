import type { UseFormReturn } from 'react-hook-form';
import { Menu } from '../../../components/ui/menu';
import type { Choice } from '../../../components/ui/options';
import type { WatchFormValues } from '../watch-form-values';

interface Props {
  form: UseFormReturn<WatchFormValues>;
  sites: readonly Choice[];
}

/** The blank for sites: any, or those ticked. */
export function SiteBlank({ form, sites }: Props) {
  const chosen = form.watch('sites');
  const first = sites.find(({ value }) => value === chosen[0])?.label ?? chosen[0];
  const word =
    chosen.length === 0
      ? 'any site'
      : chosen.length === 1
        ? first
        : `${first} and ${chosen.length - 1} more`;
  return (
    <Menu label="Sites" align="left" look="blank cursor-pointer" word={word}>
      <fieldset>
        <legend className="pb-8 text-ink-soft">None ticked means any site you may see.</legend>
        {sites.map(({ value, label }) => (
          <label key={value} className="flex min-h-28 items-center gap-8">
            <input
              type="checkbox"
              className="accent-verdigris"
              value={value}
              {...form.register('sites')}
            />
            {label}
          </label>
        ))}
      </fieldset>
    </Menu>
  );
}
