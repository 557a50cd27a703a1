import { ApiProblem } from './api-problem';

/** Pointers of the server's faults onto names of form fields: "/scope/sites" gives "scope.sites". */
export const fieldOf = (pointer: string): string =>
  pointer.replace(/^\//, '').replaceAll('/', '.').replaceAll('~1', '/').replaceAll('~0', '~');

/** The server's faults by field name; '' holds those of the whole. Empty for other errors. */
export function faultsByField(error: unknown): Record<string, string> {
  if (!(error instanceof ApiProblem)) return {};
  return Object.fromEntries(error.faults.map(({ pointer, detail }) => [fieldOf(pointer), detail]));
}
