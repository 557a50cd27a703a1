import { encodeAei } from '../../server/domain/identifiers/aei.js';

/** One read as it lies in the table and as it goes over the wire. */
export interface BenchRead {
  antenna: number;
  tag: string;
  readAt: Date;
  rssi: number;
  count: number;
}

const TAGS = Array.from({ length: 20_000 }, (_, index) =>
  encodeAei({
    groupCode: 19,
    initial: 'QTKX',
    number: 100_000 + (index >> 1),
    side: index % 2 === 0 ? 'left' : 'right',
    lengthDm: 170,
  }),
);

/**
 * Requests of trains going by the four antennas of one site: every read is another one, times
 * grow, each tag is read three times at an antenna of its side.
 */
export function trainRequests(options: {
  requests: number;
  readsPerRequest: number;
  start: Date;
  site: number;
}): BenchRead[][] {
  const { requests, readsPerRequest, start, site } = options;
  return Array.from({ length: requests }, (_, request) =>
    Array.from({ length: readsPerRequest }, (_unused, place) => {
      const number = request * readsPerRequest + place;
      const passage = Math.floor(number / 3);
      return {
        antenna: 1 + (passage % 4),
        tag: TAGS[(site * 5_003 + (passage >> 1)) % TAGS.length] ?? '',
        readAt: new Date(start.getTime() + number * 7),
        rssi: -40 - (number % 25),
        count: 1 + (number % 6),
      };
    }),
  );
}
