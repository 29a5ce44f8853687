import type { FieldProblem } from '../../../shared/contracts/errors.ts';
import type { EnteredSample } from '../../../shared/contracts/sampling.ts';
import { nextNumber, numberStem } from '../../../shared/rules/sample-label.ts';
import { unitKey } from '../../../shared/rules/sample-registry.ts';
import { readTypedResult } from '../../../shared/rules/typed-result.ts';
import { convertValue } from '../../../shared/rules/unit-convert.ts';
import type { Tx } from '../../db/client.ts';
import type { samples } from '../../db/schema/index.ts';
import { invalidInput } from '../../http/parse.ts';
import type { SiteRow } from '../../http/rows.ts';
import { numberTaken } from '../laboratory/repo.ts';
import { findMethod, getSamplePoint } from '../samples/points-repo.ts';
import { numbersWith } from './repo.ts';

const aheadMs = 10 * 60_000;

export type NewEntry = Pick<
  typeof samples.$inferSelect,
  | 'siteId'
  | 'samplePointId'
  | 'methodId'
  | 'sampleNumber'
  | 'value'
  | 'qualifier'
  | 'unit'
  | 'asWritten'
  | 'statedUnit'
  | 'statedValue'
> & { takenAt: Date };

/** What was typed as a sample of this site, or everything that is wrong with it, beside its fields. */
export async function readEntry(tx: Tx, site: SiteRow, body: EnteredSample, now: Date): Promise<NewEntry> {
  const fields: FieldProblem[] = [];
  const wrong = (path: string, message: string) => void fields.push({ path, message });
  const point = await getSamplePoint(tx, site.id, body.samplePointId);
  if (!point || point.archivedAt)
    wrong('samplePointId', 'This sample point is not one in use at the site. Choose another.');
  const method = body.methodId === null ? null : await findMethod(tx, site.id, body.methodId);
  if (body.methodId !== null && !method)
    wrong('methodId', 'This method is not one in use at the site. Choose another.');
  const takenAt = new Date(body.takenAt);
  if (takenAt.getTime() > now.getTime() + aheadMs)
    wrong('takenAt', 'This time is still to come. Give the time the sample was taken.');
  else if (takenAt.getTime() < 0) wrong('takenAt', 'This time lies before 1970. Check the year.');
  const read = readTypedResult(body.value);
  if (!read.ok) wrong('value', read.message);
  const units = point ? [...new Set(point.goesTo.map(({ unit }) => unit))] : [];
  const expected = method?.unit ?? units[0] ?? body.unit;
  const converted = read.ok ? inUnit(read.value, body.unit, expected, units) : null;
  if (read.ok && !converted)
    wrong(
      'unit',
      `In ${body.unit || 'no unit'}, but samples of this point are in ${expected || 'no unit'}. Write the value so.`,
    );
  if (fields.length > 0 || !read.ok || !converted) throw invalidInput(fields);
  return {
    siteId: site.id,
    samplePointId: point!.id,
    methodId: body.methodId,
    sampleNumber: await numberOf(tx, site, point!, body, takenAt),
    takenAt,
    asWritten: body.value,
    qualifier: read.qualifier,
    ...converted,
  };
}

/** The number that was typed, where it is free, or the next of the point and day. */
async function numberOf(
  tx: Tx,
  site: SiteRow,
  point: { id: number; name: string },
  { sampleNumber, methodId }: EnteredSample,
  takenAt: Date,
): Promise<string> {
  if (sampleNumber === '') {
    const stem = numberStem(point.name, takenAt.getTime(), site.zone);
    return nextNumber(stem, await numbersWith(tx, site.id, [point.id], [stem]));
  }
  if (await numberTaken(tx, site.id, { samplePointId: point.id, methodId, sampleNumber }, 0)) {
    const message = `There is a sample ${sampleNumber} at ${point.name} already. Give this one another number, or leave it empty.`;
    throw invalidInput([{ path: 'sampleNumber', message }]);
  }
  return sampleNumber;
}

function inUnit(value: number, stated: string, expected: string, others: readonly string[]) {
  const known = [expected, ...others].find((unit) => unitKey(unit) === unitKey(stated));
  if (known !== undefined) return { value, unit: known, statedUnit: null, statedValue: null };
  const converted = convertValue(value, stated, expected);
  return converted.ok
    ? { value: converted.value, unit: expected, statedUnit: stated, statedValue: value }
    : null;
}
