import { useQuery } from '@tanstack/react-query';
import { ErrorNotice } from '../../../components/ui/notice';
import { NetworkMap } from '../../../components/map/network-map';
import { usePreferences } from '../../../lib/preferences';
import { mapQuery } from '../api/map';

interface Props {
  chosen: string | undefined;
  onChoose: (code: string) => void;
}

/** The map beside the table; it fails by itself and leaves the rest. */
export function NetworkPanel({ chosen, onChoose }: Props) {
  const { distance } = usePreferences();
  const map = useQuery(mapQuery);
  if (map.isPending) return <div className="map-frame" aria-hidden="true" />;
  if (map.isError && !map.data) {
    return (
      <ErrorNotice
        what="The map did not come; the table stands without it"
        error={map.error}
        onRetry={() => void map.refetch()}
      />
    );
  }
  const { sites, routes } = map.data;
  return (
    <NetworkMap sites={sites} routes={routes} chosen={chosen} onChoose={onChoose} unit={distance} />
  );
}
