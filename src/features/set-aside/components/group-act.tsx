import { Link } from 'react-router-dom';
import { paths } from '../../../lib/paths';
import type { HeldGroupView } from '../../../lib/wire';
import type { OnAct } from '../acting';

interface Props {
  group: HeldGroupView;
  /** The tags of its reads stand on the same page, each with its own act. */
  hasTags: boolean;
  onAct: OnAct;
}

/** The one thing that can be done about these reads, or that there is none. */
export function GroupAct({ group, hasTags, onAct }: Props) {
  const { act, code, site } = group;
  if (act === 'none') return <span className="text-ink-soft">nothing to do</span>;
  const of = <span className="only-heard"> of {site.name}</span>;
  if (act === 'registerTag' && hasTags) return <span className="text-ink-soft">by tag, below</span>;
  if (act === 'registerTag') {
    return <Link to={paths.setAside({ code })}>Say what wears them{of}</Link>;
  }
  return (
    <button type="button" className="link" onClick={() => onAct({ act, group })}>
      {act === 'release' ? 'Release' : 'Add the antenna'}
      {of}
    </button>
  );
}
