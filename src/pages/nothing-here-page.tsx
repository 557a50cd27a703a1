import { Link } from 'react-router-dom';
import { Sentence } from '../components/ui/sentence';
import { paths } from '../lib/paths';
import { useTitle } from '../lib/use-title';

/** An address that leads nowhere, or to something this person may not see. */
export function NothingHerePage() {
  useTitle('Nothing here');
  return (
    <Sentence
      under={
        <>
          The address is wrong, or it is not yours to see.{' '}
          <Link to={paths.fleet()}>Go to Fleet</Link>.
        </>
      }
    >
      There is nothing at this address.
    </Sentence>
  );
}
