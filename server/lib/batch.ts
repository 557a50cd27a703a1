import type { Faults } from './faults.js';
import { pointerOf } from './pointer.js';

/** One or many of a kind, as they came in one body. */
export interface Batch<T> {
  items: T[];
  /** They came as a list, and are answered as one. */
  isList: boolean;
}

/** JSON pointer into the body of item `index`: `/3/site` in a list, `/site` when it came alone. */
export function batchPointer(batch: Batch<unknown>, index: number, ...path: PropertyKey[]): string {
  return pointerOf(batch.isList ? [index, ...path] : path);
}

/** A JSON pointer to a part of the item that is looked at. */
export type PointerTo = (...path: PropertyKey[]) => string;

/** Adds a fault for each item whose key an earlier item has already. */
export function faultRepeats<T>(
  batch: Batch<T>,
  faults: Faults,
  field: string,
  keyOf: (item: T) => string,
): void {
  const seen = new Map<string, number>();
  batch.items.forEach((item, index) => {
    const key = keyOf(item);
    const first = seen.get(key);
    if (first === undefined) seen.set(key, index);
    else faults.add(batchPointer(batch, index, field), `is given twice: first at /${first}`);
  });
}

/** Keys whose value is given; what is left out keeps its present value. */
export function given<T extends object>(values: T): Partial<T> {
  const entries = Object.entries(values).filter(([, value]) => value !== undefined);
  return Object.fromEntries(entries) as Partial<T>;
}
