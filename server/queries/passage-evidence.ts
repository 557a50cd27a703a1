import { z } from 'zod';

/** Reads of one tag at one antenna within a passage. */
export interface EvidenceRun {
  antenna: number;
  tag: string;
  reads: number;
}

/** What the projector keeps of a visit: reads `[ms, antenna, tag]` or, of many, their groups. */
const visitSchema = z.union([
  z.object({ r: z.array(z.tuple([z.number(), z.number(), z.string()])) }),
  z.object({
    g: z.array(z.tuple([z.number(), z.string(), z.number(), z.number(), z.number()])),
  }),
]);
const evidenceSchema = z.array(visitSchema);

/** The reads of a passage, out of its `evidence` column, counted by antenna and tag. */
export function evidenceRuns(evidence: string): EvidenceRun[] {
  const runs = new Map<string, EvidenceRun>();
  const add = (antenna: number, tag: string, reads: number) => {
    const key = `${antenna} ${tag}`;
    const known = runs.get(key);
    if (known) known.reads += reads;
    else runs.set(key, { antenna, tag, reads });
  };
  for (const visit of evidenceSchema.parse(JSON.parse(evidence))) {
    if ('r' in visit) visit.r.forEach(([, antenna, tag]) => add(antenna, tag, 1));
    else visit.g.forEach(([antenna, tag, , , count]) => add(antenna, tag, count));
  }
  return [...runs.values()];
}
