import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { paths } from '../../../lib/paths';
import { alertCountQuery } from '../api/alert-list';

/** "7 alerts to answer" in the header; nothing to press where there are none. */
export function AlertsToAnswer() {
  const { data: count } = useQuery(alertCountQuery('open'));
  if (count === undefined) return null;
  if (count === 0) return <span className="text-on-creosote-soft">no alerts to answer</span>;
  return (
    <Link to={paths.alerts()} className="text-on-creosote-soft">
      <b className="font-medium text-on-creosote">{count}</b> {count === 1 ? 'alert' : 'alerts'} to
      answer
    </Link>
  );
}
