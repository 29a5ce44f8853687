import { AppError } from '../../../shared/contracts/errors.ts';
import type { Tx } from '../../db/client.ts';
import type { SensorRow } from '../estimates/repo.ts';
import { currentOwnership } from '../register/repo.ts';

/** Nobody would be reminded and nobody would stand in: a model of class A or B needs an owner and a deputy first. */
export async function refuseUnowned(tx: Tx, sensor: SensorRow): Promise<void> {
  if (sensor.importanceClass === 'C') return;
  const ownership = await currentOwnership(tx, sensor.siteId, sensor.id);
  const missing = [...(ownership?.ownerId ? [] : ['an owner']), ...(ownership?.deputyId ? [] : ['a deputy'])];
  if (missing.length === 0) return;
  throw new AppError(
    'conflict',
    `A soft sensor of class ${sensor.importanceClass} needs an owner and a deputy before its model is sent for approval. Name ${missing.join(' and ')} on its data sheet first.`,
  );
}
