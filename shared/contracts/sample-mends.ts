import { z } from 'zod';
import { idNumber } from './endpoint.ts';
import { healths } from './judging.ts';

/** The parts of a row that a person may write anew in place of the file. */
export const mendable = z.enum(['sampleNumber', 'takenAt', 'reportedAt', 'value', 'unit', 'samplePoint']);
export type Mendable = z.infer<typeof mendable>;

const mend = z
  .partialRecord(mendable, z.string().max(200, 'Keep it under 200 characters.'))
  .and(z.object({ leaveOut: z.boolean().optional() }));

/** What a person wrote in place of cells: by line of the file, then by part; `leaveOut` skips the row. */
export const sampleMends = z.record(z.string().regex(/^\d{1,9}$/), mend);
export type SampleMends = z.infer<typeof sampleMends>;

/** What stands beside the rows of a file: what a person wrote anew, how it was known, and what came of adding it. */
export const importExtras = {
  mends: sampleMends,
  /** The profile of files with these columns; not `taken` where this one is read otherwise. */
  recognised: z.object({ profileId: idNumber, name: z.string(), taken: z.boolean() }).nullable(),
  /** Rows of a file already added that can be added now, as after a mend or a new name of a point. */
  moreToAdd: z.number().int(),
  receipt: z
    .object({
      /** Soft sensors whose samples came in with it, and those of them that are still being judged. */
      softSensors: z.number().int(),
      waiting: z.number().int(),
      changedHealth: z.array(
        z.object({ softSensorId: idNumber, tagName: z.string(), health: z.enum(healths) }),
      ),
    })
    .nullable(),
};
