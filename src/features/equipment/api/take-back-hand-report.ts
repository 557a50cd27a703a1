import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { HandReportsAnswer } from '../../../lib/wire';

/** Takes back what was reported by eye at a site; twice is once. Throws what was refused. */
export async function takeBackHandReport(site: string, id: string): Promise<void> {
  const body = { ids: [id] };
  const answer = await request<HandReportsAnswer>('POST', api.retractions(site), { body });
  const [problem] = answer.problems;
  if (problem) throw new Error(problem.detail);
}
