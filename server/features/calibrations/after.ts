import { eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { Calibration, calibrations as contract } from '../../../shared/contracts/calibrations.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Context } from '../../context.ts';
import { calibrations } from '../../db/schema/index.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { findSensor } from '../estimates/repo.ts';
import { queueJudging } from '../judging/changed.ts';
import { note } from '../register/note.ts';
import type { By } from '../register/service.ts';
import { type CalibrationRow, getCalibration } from './repo.ts';
import { refuseDecided, told } from './service.ts';

const clockSkewMs = 10 * 60_000;

/** Takes a proposal back that nobody decided yet. */
export async function withdrawCalibration(
  context: Context,
  by: By,
  row: Permitted<CalibrationRow>,
): Promise<Calibration> {
  return context.db.transaction(async (tx) => {
    const calibration = await lockRow(tx, 'calibration', row);
    refuseDecided(calibration);
    const sensor = (await findSensor(tx, row.siteId, row.softSensorId))!;
    await tx
      .update(calibrations)
      .set({ decision: 'withdrawn', decidedAt: context.clock(), decidedBy: by.actor.id })
      .where(eq(calibrations.id, calibration.id));
    const after = { ...told(calibration), decision: 'withdrawn' };
    await note(context, tx, by, sensor, 'change', 'recalibration', told(calibration), after);
    return getCalibration(tx, calibration);
  });
}

/** Notes who entered an approved correction in the control system, and when: it is in force from then on. */
export async function enterCalibration(
  context: Context,
  by: By,
  row: Permitted<CalibrationRow>,
  body: z.output<(typeof contract)['calibrations.enter']['body']>,
): Promise<Calibration> {
  return context.db.transaction(async (tx) => {
    const calibration = await lockRow(tx, 'calibration', row);
    const sensor = (await findSensor(tx, row.siteId, row.softSensorId))!;
    if (calibration.decision !== 'approved' || !calibration.toBeEntered) {
      throw new AppError(
        'conflict',
        'Only an approved correction of an external estimate is entered in a control system.',
      );
    }
    if (calibration.enteredAt) {
      throw new AppError(
        'conflict',
        `${calibration.enteredBy} entered recalibration ${calibration.number} already.`,
      );
    }
    const enteredAt = new Date(body.enteredAt);
    const say = (message: string) => invalidInput([{ path: 'enteredAt', message }]);
    if (enteredAt < calibration.decidedAt!) throw say('It can’t have been entered before it was approved.');
    if (enteredAt.getTime() > context.clock().getTime() + clockSkewMs) throw say('This time is yet to come.');
    const values = { enteredBy: body.enteredBy, enteredAt };
    await tx
      .update(calibrations)
      .set({
        ...values,
        enteredRecordedBy: by.actor.id,
        enteredRecordedAt: context.clock(),
        effectiveFrom: enteredAt,
      })
      .where(eq(calibrations.id, calibration.id));
    await queueJudging(tx, sensor.siteId, sensor.id);
    const after = { ...told(calibration), enteredBy: body.enteredBy, enteredAt: body.enteredAt };
    await note(context, tx, by, sensor, 'change', 'recalibration', told(calibration), after);
    return getCalibration(tx, calibration);
  });
}
