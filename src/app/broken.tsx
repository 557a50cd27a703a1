import { useRouteError } from 'react-router-dom';
import { ErrorNotice } from '../components/ui/notice';

/** A page that failed while drawing: says so and offers to load it anew. */
export function Broken() {
  const error = useRouteError();
  return (
    <main className="inset py-32">
      <ErrorNotice
        what="This page could not be drawn; nothing was changed"
        error={error}
        onRetry={() => window.location.reload()}
      />
    </main>
  );
}
