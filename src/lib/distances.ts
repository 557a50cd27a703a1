import type { Preferences } from './preferences';

const metresAMile = 1609.344;

/** "1,204 miles" or "1,938 km"; one decimal under ten. */
export function formatDistance(metres: number, unit: Preferences['distance']): string {
  const value = unit === 'miles' ? metres / metresAMile : metres / 1000;
  const written = value.toLocaleString('en-US', { maximumFractionDigits: value < 10 ? 1 : 0 });
  return unit === 'miles' ? `${written} mi` : `${written} km`;
}

/** "Rail miles" or "Rail km", for headings. */
export const distanceHeading = (unit: Preferences['distance']): string =>
  unit === 'miles' ? 'Rail miles' : 'Rail km';

/** "19 mph" or "30 km/h". */
export const formatSpeed = (kmh: number, unit: Preferences['distance']): string =>
  unit === 'miles' ? `${Math.round((kmh * 1000) / metresAMile)} mph` : `${Math.round(kmh)} km/h`;
