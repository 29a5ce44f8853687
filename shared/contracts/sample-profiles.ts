import { z } from 'zod';
import { sampleMapping } from './sample-import.ts';

/** The parts of a row that a person may write anew in place of the file. */
export const mendable = z.enum(['sampleNumber', 'takenAt', 'reportedAt', 'value', 'unit', 'samplePoint']);

/** What a person wrote in place of cells: by line of the file, then by part; `leaveOut` skips the row. */
export const sampleMends = z.record(
  z.string().regex(/^\d+$/),
  z.partialRecord(mendable, z.string().max(200)).and(z.object({ leaveOut: z.boolean().optional() })),
);
export type SampleMends = z.infer<typeof sampleMends>;

/** A mapping as a profile keeps it: everything but what belongs to one file alone. */
export const profileMapping = sampleMapping.omit({ headerLine: true });
export type ProfileMapping = z.infer<typeof profileMapping>;
