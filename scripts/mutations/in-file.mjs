/**
 * Rules of one file, each as its name, the text that states it, and the text that drops it (none:
 * nothing stands there then). `tests` names the suite that must miss them.
 *
 * @param {string} file
 * @param {import('./drop-rules.mjs').Mutation['tests']} tests
 * @param {[rule: string, from: string, to?: string][]} rules
 * @returns {import('./drop-rules.mjs').Mutation[]}
 */
export function inFile(file, tests, rules) {
  return rules.map(([rule, from, to = '']) => ({ rule, file, from, to, tests }));
}
