import type { Context } from '../../server/lib/context.js';

export interface AskedStatement {
  text: string;
  values: unknown[];
}

/** Statements that went over the bare pool and through Sequelize since the last `take()`. */
export interface StatementCount {
  take(): AskedStatement[];
}

/** The context with a pool that writes down what it is asked; the database stays the same. */
export function countStatements<T extends Context>(
  context: T,
): { context: T; statements: StatementCount } {
  let asked: AskedStatement[] = [];
  const { pool, sequelize } = context.db;
  const counted = new Proxy(pool, {
    get(target, property, receiver) {
      if (property !== 'query') return Reflect.get(target, property, receiver) as unknown;
      return (text: string, values: unknown[]) => {
        asked.push({ text, values });
        return target.query<unknown>(text, values);
      };
    },
  });
  sequelize.addHook('beforeQuery', () => {
    asked.push({ text: 'through Sequelize', values: [] });
  });
  const statements = {
    take() {
      const taken = asked;
      asked = [];
      return taken;
    },
  };
  return { context: { ...context, db: { ...context.db, pool: counted } }, statements };
}
