import { z } from 'zod';

/** Reads of one tag at one antenna within a passage, as `passages.evidence` keeps them. */
export interface EvidenceRun {
  antenna: number;
  tag: string;
  reads: number;
}

const runSchema = z.object({ a: z.number(), t: z.string(), n: z.number() });
const evidenceSchema = z.array(z.array(runSchema));

/** The runs of all visits of a passage, in the order they were kept. */
export function evidenceRuns(evidence: string): EvidenceRun[] {
  const visits = evidenceSchema.parse(JSON.parse(evidence));
  return visits.flat().map(({ a, t, n }) => ({ antenna: a, tag: t, reads: n }));
}
