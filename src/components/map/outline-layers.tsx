import { useEffect, useState } from 'react';
import { Pane, Polygon, Polyline } from 'react-leaflet';
import type { LatLngTuple } from 'leaflet';
import type { Position } from 'geojson';
import { loadOutline } from './outline';
import type { Outline } from './outline';
import type { Box } from './map-types';

const waterLineDistances = [40, 31, 23, 16, 10, 5];
const beyond = 4;

const toLatLng = (lines: Position[][]): LatLngTuple[][] =>
  lines.map((line) => line.map(([x = 0, y = 0]) => [y, x]));

/** The engraved sheet: land, shores with their water lines, borders in dash and dot. Comes when it is there. */
export function OutlineLayers({ box }: { box: Box }) {
  const outline = useOutline(box);
  if (!outline) return null;
  const shores = toLatLng(outline.shores);
  return (
    <>
      <Pane name="water" style={{ zIndex: 200 }}>
        {waterLineDistances.map((distance) => (
          <WaterLine key={distance} shores={shores} distance={distance} />
        ))}
      </Pane>
      <Pane name="land" style={{ zIndex: 210 }}>
        <Polygon positions={outline.land.map(toLatLng)} interactive={false} className="map-land" />
        <Polyline
          positions={shores}
          interactive={false}
          className="map-shore"
          pathOptions={{ weight: 1 }}
        />
      </Pane>
      <Pane name="borders" style={{ zIndex: 220 }}>
        <Polyline
          positions={toLatLng(outline.borders)}
          interactive={false}
          className="map-border"
          pathOptions={{ weight: 1, dashArray: '9 3 1.5 3' }}
        />
      </Pane>
    </>
  );
}

/** One line along the shore: a wide stroke with a narrower one of paper on it; land covers its inner half. */
function WaterLine({ shores, distance }: { shores: LatLngTuple[][]; distance: number }) {
  return (
    <>
      <Polyline
        positions={shores}
        interactive={false}
        className="map-water"
        pathOptions={{ weight: distance * 2 }}
      />
      <Polyline
        positions={shores}
        interactive={false}
        className="map-paper"
        pathOptions={{ weight: distance * 2 - 1.2 }}
      />
    </>
  );
}

function useOutline(box: Box): Outline | null {
  const [outline, setOutline] = useState<Outline | null>(null);
  const [w, s, e, n] = box;
  useEffect(() => {
    let isWanted = true;
    loadOutline([w - beyond, s - beyond, e + beyond, n + beyond])
      .then((loaded) => {
        if (isWanted) setOutline(loaded);
      })
      // Without its outlines the map still shows the network.
      .catch(() => undefined);
    return () => {
      isWanted = false;
    };
  }, [w, s, e, n]);
  return outline;
}
