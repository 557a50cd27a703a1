import { Link } from 'react-router-dom';
import type { Choice } from '../../../components/ui/options';
import { paths } from '../../../lib/paths';
import type { FleetFilter } from '../../../lib/paths';
import { sayKind } from '../../../lib/words';

interface Props {
  filter: Partial<FleetFilter>;
  sites: readonly Choice[];
}

/** Each filter that is on, as a link that drops it alone. */
export function DropFilters({ filter, sites }: Props) {
  const names = (Object.keys(filter) as (keyof FleetFilter)[]).filter((name) => name !== 'sort');
  return (
    <ul className="flex flex-wrap gap-x-20 gap-y-8">
      {names.map((name) => (
        <li key={name}>
          <Link to={paths.fleet(without(filter, name))}>Drop {sayFilter(name, filter, sites)}</Link>
        </li>
      ))}
    </ul>
  );
}

const without = (filter: Partial<FleetFilter>, dropped: keyof FleetFilter): Partial<FleetFilter> =>
  Object.fromEntries(Object.entries(filter).filter(([name]) => name !== dropped));

const states: Record<string, string> = {
  enRoute: 'moving',
  onHand: 'on hand',
  unseen: 'never read',
};

function sayFilter(
  name: keyof FleetFilter,
  filter: Partial<FleetFilter>,
  sites: readonly Choice[],
): string {
  const value = filter[name] ?? '';
  if (name === 'search') return `“${value}”`;
  if (name === 'site') return sites.find((site) => site.value === value)?.label ?? value;
  if (name === 'kind') return sayKind(value, 2);
  if (name === 'state') return states[value] ?? value;
  if (name === 'quiet') return 'quiet';
  return name === 'pastLimit' ? 'past their limit' : `owned by ${value}`;
}
