import { ChoiceRow } from '../components/ui/choice-row';
import { setPreferences, usePreferences } from '../lib/preferences';

/** What is set for this device: paper, rows, distances, keys. */
export function DeviceSettings() {
  const { theme, density, distance, singleKeys } = usePreferences();
  return (
    <div className="border-t border-rule">
      <ChoiceRow
        label="Paper"
        value={theme}
        choices={[
          { value: 'system', label: 'system' },
          { value: 'light', label: 'light' },
          { value: 'dark', label: 'dark' },
        ]}
        onChoose={(value) => setPreferences({ theme: value })}
      />
      <ChoiceRow
        label="Rows"
        value={density}
        choices={[
          { value: 'normal', label: 'normal' },
          { value: 'dense', label: 'dense' },
        ]}
        onChoose={(value) => setPreferences({ density: value })}
      />
      <ChoiceRow
        label="Distances"
        value={distance}
        choices={[
          { value: 'miles', label: 'miles' },
          { value: 'kilometres', label: 'kilometres' },
        ]}
        onChoose={(value) => setPreferences({ distance: value })}
      />
      <ChoiceRow
        label="Key /"
        value={singleKeys}
        choices={[
          { value: 'on', label: 'goes to look-up' },
          { value: 'off', label: 'off' },
        ]}
        onChoose={(value) => setPreferences({ singleKeys: value })}
      />
    </div>
  );
}
