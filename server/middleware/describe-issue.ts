import type { z } from 'zod';

const nouns: Record<string, string> = {
  string: 'text',
  number: 'a number',
  int: 'a whole number',
  boolean: 'true or false',
  array: 'a list',
  object: 'an object',
  record: 'an object',
};

/** Says in words what is wrong where a schema has no words of its own. */
export function describeIssue(issue: z.core.$ZodRawIssue): string | undefined {
  if (issue.input === undefined && issue.code !== 'custom') return 'is missing';
  switch (issue.code) {
    case 'invalid_type':
      return `must be ${nouns[issue.expected] ?? issue.expected}`;
    case 'invalid_value':
      return `must be ${issue.values.length > 1 ? 'one of ' : ''}${issue.values.join(', ')}`;
    case 'too_small':
      return `must be ${bound(issue.origin, 'at least', issue.minimum)}`;
    case 'too_big':
      return `must be ${bound(issue.origin, 'at most', issue.maximum)}`;
    case 'invalid_format':
      return `must be in the form of ${issue.format === 'regex' ? 'the interface' : issue.format}`;
    default:
      return undefined;
  }
}

function bound(origin: string, word: string, limit: number | bigint): string {
  if (origin === 'string') return `${word} ${limit} characters long`;
  if (origin === 'array') return `a list of ${word} ${limit}`;
  return `${word} ${limit}`;
}
