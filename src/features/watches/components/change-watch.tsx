import { Dialog } from '../../../components/ui/dialog';
import type { Choice } from '../../../components/ui/options';
import type { SessionInfo, WatchView } from '../../../lib/wire';
import { toFormValues } from '../watch-form-values';
import { WatchForm } from './watch-form';

interface Props {
  watch: WatchView;
  session: SessionInfo;
  sites: readonly Choice[];
  onClose: () => void;
}

/** The sentence of a watch that exists, to be changed; what it looks for stays. */
export function ChangeWatch({ watch, session, sites, onClose }: Props) {
  return (
    <Dialog heading="Change what you are told" onClose={onClose}>
      <WatchForm
        id={watch.id}
        start={toFormValues(watch, session.user.id)}
        me={session.user}
        sites={sites}
        onSaved={onClose}
      />
    </Dialog>
  );
}
