/** The value below which a share of the values lies (the nearest rank); NaN of nothing. */
export function quantile(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.max(0, Math.ceil(share * sorted.length) - 1)] ?? NaN;
}

/** Milliseconds as seconds with two places. */
export const inSeconds = (ms: number) => `${(ms / 1000).toFixed(2)} s`;
