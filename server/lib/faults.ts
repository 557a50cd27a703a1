import { invalid, type ProblemFault } from '../errors.js';

/** Gathers what is wrong with an input, so that it is told all at once. */
export class Faults {
  private readonly found: ProblemFault[] = [];

  add(pointer: string, detail: string): void {
    this.found.push({ pointer, detail });
  }

  /** Throws one 400 problem with everything gathered so far; does nothing when all is well. */
  refuse(): void {
    if (this.found.length === 0) return;
    const count = this.found.length;
    const detail =
      count === 1 ? 'One thing is wrong; see errors.' : `${count} things are wrong; see errors.`;
    throw invalid(detail, this.found);
  }
}
