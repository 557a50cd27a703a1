import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { HandReportsAnswer } from '../../../lib/wire';

/** One car seen, or looked for and not there, at this instant. */
export interface EyeReport {
  id: string;
  unit: string;
  site: string;
  track: string;
  seen: boolean;
  at: string;
}

/** Reports what somebody saw. Sending the same again changes nothing. Throws what was refused. */
export async function sendHandReport({ site, track, ...report }: EyeReport): Promise<void> {
  const body = { track: track.trim() || null, reports: [report] };
  const answer = await request<HandReportsAnswer>('POST', api.handReports(site), { body });
  const [problem] = answer.problems;
  if (problem) throw new Error(problem.detail);
}
