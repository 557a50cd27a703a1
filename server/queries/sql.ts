import type { Database } from '../lib/database.js';

/** A piece of a statement with the values of its question marks, in order. */
export interface Sql {
  text: string;
  values: unknown[];
}

/**
 * Tagged template: pieces are spliced in, everything else becomes a bound value. An array becomes
 * a list, for `IN (…)`; it must not be empty.
 */
export function sql(strings: TemplateStringsArray, ...parts: unknown[]): Sql {
  const values: unknown[] = [];
  let text = strings[0] ?? '';
  parts.forEach((part, index) => {
    if (isSql(part)) {
      text += part.text;
      values.push(...part.values);
    } else {
      text += '?';
      values.push(part);
    }
    text += strings[index + 1] ?? '';
  });
  return { text, values };
}

/** A name or word of the statement itself; never anything that came from outside. */
export const word = (text: string): Sql => ({ text, values: [] });

/** Joins pieces with ` separator ` between them; no pieces make an empty one. */
export function joinSql(pieces: readonly Sql[], separator: 'AND' | 'OR' | 'UNION' | ','): Sql {
  return {
    text: pieces.map((piece) => piece.text).join(` ${separator} `),
    values: pieces.flatMap((piece) => piece.values),
  };
}

/** Runs one statement on the pool. */
export function ask<Row>(db: Database, statement: Sql): Promise<Row[]> {
  return db.pool.query<Row[]>(statement.text, statement.values);
}

/** Text to be found as it stands inside a LIKE pattern. */
export const likeText = (text: string): string => text.replace(/[\\%_]/g, (sign) => `\\${sign}`);

function isSql(part: unknown): part is Sql {
  return (
    typeof part === 'object' &&
    part !== null &&
    'text' in part &&
    'values' in part &&
    Array.isArray(part.values)
  );
}
