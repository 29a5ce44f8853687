import { biasTrials } from './bias-figures.ts';
import { chartTrials } from './chart-figures.ts';
import { recalibrationTrials } from './recalibration-figures.ts';
import type { Trial } from './trial.ts';

/** The simulated figures on which the judging of errors, the charts and the recalibration rest. */
export const trials: Trial[] = [...biasTrials, ...chartTrials, ...recalibrationTrials];
