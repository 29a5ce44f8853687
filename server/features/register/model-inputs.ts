import type { Model } from '../../../shared/contracts/models.ts';
import type { Tx } from '../../db/client.ts';
import { invalidInput } from '../../http/parse.ts';
import { type SensorRow, tagNames } from '../estimates/repo.ts';

/** Refuses inputs that are no tag of the site, the estimate itself, or named twice; each beside its term. */
export async function refuseWrongInputs(tx: Tx, sensor: SensorRow, model: Model): Promise<void> {
  if (model.form !== 'regression') return;
  const known = await tagNames(
    tx,
    sensor.siteId,
    model.terms.map((term) => term.tagId),
  );
  const fields = model.terms.flatMap(({ tagId }, index) => {
    const path = `model.terms.${index}.tagId`;
    if (!known.has(tagId)) return [{ path, message: 'This tag is not one of the site. Choose another.' }];
    if (tagId === sensor.estimateTagId)
      return [{ path, message: 'An estimate can’t be its own input. Choose another tag.' }];
    if (model.terms.findIndex((term) => term.tagId === tagId) < index) {
      return [{ path, message: `${known.get(tagId)!.name} is an input already. Leave it out here.` }];
    }
    return [];
  });
  if (fields.length > 0) throw invalidInput(fields);
}
