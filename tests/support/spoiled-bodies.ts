import { z } from 'zod';

type Schema = z.core.JSONSchema.BaseSchema;

/** Values for fields of these names, where any text would do for the schema but not for us. */
export type Known = Record<string, unknown>;

/** A body that a schema should take, made from the schema as the interface document tells it. */
export function sampleOf(body: z.ZodType, known: Known): unknown {
  const root = z.toJSONSchema(body, { io: 'input', unrepresentable: 'any' }) as Schema;
  const make = (schema: Schema, name: string): unknown => {
    if (schema.$ref) return make(definitionOf(root, schema.$ref), name);
    const choice = (schema.anyOf ?? schema.oneOf)?.find((one) => one.type !== 'null');
    if (choice) return make(choice, name);
    if (schema.const !== undefined) return schema.const;
    if (schema.enum) return schema.enum[0];
    const type = [schema.type].flat()[0];
    if (name in known && type !== 'array' && type !== 'object') return known[name];
    switch (type) {
      case 'object': {
        const properties = Object.entries(schema.properties ?? {});
        return Object.fromEntries(properties.map(([key, one]) => [key, make(one as Schema, key)]));
      }
      case 'array':
        return [make((schema.items ?? {}) as Schema, name)];
      case 'number':
      case 'integer':
        return Math.max(schema.minimum ?? 1, 1);
      case 'boolean':
        return true;
      default:
        return textOf(schema);
    }
  };
  return make(root, '');
}

function definitionOf(root: Schema, ref: string): Schema {
  const name = ref.split('/').at(-1) ?? '';
  return (root.$defs as Record<string, Schema>)[name] ?? {};
}

function textOf({ format, pattern, minLength = 1 }: Schema): string {
  if (format === 'date-time') return '2026-11-01T00:00:00Z';
  if (format === 'email') return 'somebody@tests.example';
  if (format === 'uuid') return '0f5bd0a6-5b4e-4c7d-9a3c-2d8f0c1f5e11';
  const texts = ['x'.repeat(minLength), 'A1', 'AB', '1'];
  return texts.find((text) => !pattern || new RegExp(pattern, 'u').test(text)) ?? '';
}

/** A body as JSON text, and what is odd about it. */
export interface Spoiled {
  what: string;
  text: string;
}

const many = (count: number) => Array.from({ length: count }, (_, n) => n);
const manyFields = `{${many(10_000)
  .map((n) => `"${n.toString(36)}":0`)
  .join()}}`;

/** What stands in the place of a whole body, or of any part of one. */
const wrongValues: Record<string, string> = {
  null: 'null',
  true: 'true',
  zero: '0',
  'minus one': '-1',
  'a fraction': '0.5',
  'more than a number': '1e400',
  'a number that cannot be told from its neighbour': '9007199254740993',
  'a huge number': '1e300',
  'an empty text': '""',
  blanks: '"   "',
  'ten thousand letters': `"${'x'.repeat(10_000)}"`,
  'a NUL': '"A\\u0000B"',
  'a line end': '"A\\r\\nB: c"',
  'half a character': '"A\\ud800"',
  'characters of four bytes': `"${'🚃'.repeat(30)}"`,
  'a name of the language': '"__proto__"',
  'the year 9999': '"9999-12-31T23:59:59Z"',
  'the year 0': '"0000-01-01T00:00:00Z"',
  'a statement for the database': '"\'; DROP TABLE units; --"',
  'an empty list': '[]',
  'an empty object': '{}',
  'a list of nulls': '[null,null]',
  'lists in lists': '[[["A"]]]',
  'an object of objects': '{"__proto__":{"a":{"b":{}}},"constructor":{}}',
};

const wrongBodies: Record<string, string> = {
  'ten thousand objects': `[${Array(10_000).fill('{}').join()}]`,
  'half of JSON': '{"name": ',
  'no JSON': 'name=x&kind=y',
  'two of them': '{}{}',
  'a field given twice': '{"code":"A","code":"B"}',
  'nesting that is not closed': '{"a":'.repeat(5_000),
};

const largeValues: Record<string, string> = {
  'ten thousand fields': manyFields,
  'ten thousand zeros': `[${many(10_000).fill(0).join()}]`,
  'nesting without end': '['.repeat(20_000) + ']'.repeat(20_000),
};

/**
 * Bodies with one thing wrong each: the whole, or one field of a sample at whatever depth. Of the
 * latter every `step`th; each field and each wrong value still comes up.
 */
export function spoiledBodies(sample: unknown, step: number): Spoiled[] {
  const wholes = Object.entries({ ...wrongBodies, ...wrongValues, ...largeValues }).map(
    ([what, text]) => ({
      what: `${what} for the body`,
      text,
    }),
  );
  const values = Object.entries(wrongValues);
  const paths = pathsOf(sample);
  const fields = paths.flatMap((path, at) =>
    values
      .filter((_value, index) => (at + index) % step === 0)
      .map(([what, value]) => ({
        what: `${what} at /${path.join('/')}`,
        text: replaced(sample, path, value),
      })),
  );
  const large = Object.entries(largeValues).map(([what, value], index) => ({
    what: `${what} within`,
    text: replaced(sample, paths[index % paths.length] ?? [], value),
  }));
  return [...wholes, ...fields, ...large];
}

type Path = (string | number)[];

function pathsOf(value: unknown, path: Path = []): Path[] {
  if (typeof value !== 'object' || value === null) return [path];
  const inner = Object.entries(value).flatMap(([key, part]) => pathsOf(part, [...path, key]));
  return path.length > 0 ? [path, ...inner] : inner;
}

const PLACE = '\u0001place\u0001';

/** The sample as JSON with `text` in the place of the part at `path`. */
function replaced(sample: unknown, path: Path, text: string): string {
  const copy = structuredClone(sample) as Record<string | number, unknown>;
  let at = copy;
  for (const key of path.slice(0, -1)) at = at[key] as typeof copy;
  at[path.at(-1) ?? ''] = PLACE;
  return JSON.stringify(copy).replace(JSON.stringify(PLACE), () => text);
}
