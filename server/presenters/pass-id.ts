/** What names a pass for good: its read point and its first usable read. */
export interface PassKey {
  siteCode: string;
  readPointCode: string;
  startedAt: Date;
  ordinal: number;
}

/** The public id of a pass: `ALDER-N1-mgx3k2p0`, with `-2` behind it for the rare second of an instant. */
export function passIdOf({ siteCode, readPointCode, startedAt, ordinal }: PassKey): string {
  const id = `${siteCode}-${readPointCode}-${startedAt.getTime().toString(36)}`;
  return ordinal > 0 ? `${id}-${ordinal}` : id;
}
