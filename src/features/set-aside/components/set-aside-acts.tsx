import type { Acting } from '../acting';
import { AddAntenna } from './add-antenna';
import { PutTagOn } from './put-tag-on';
import { ReleaseReads } from './release-reads';

interface Props {
  acting: Acting;
  zone: string;
  onClose: () => void;
  onDone: (says: string) => void;
}

/** The dialog of what a person is about to do. It stands apart from its row, which may go meanwhile. */
export function SetAsideActs({ acting, zone, onClose, onDone }: Props) {
  if (acting.act === 'release') {
    return <ReleaseReads group={acting.group} zone={zone} onClose={onClose} onDone={onDone} />;
  }
  if (acting.act === 'addAntenna') {
    return <AddAntenna group={acting.group} onClose={onClose} onDone={onDone} />;
  }
  return <PutTagOn tag={acting.tag} zone={zone} onClose={onClose} onDone={onDone} />;
}
