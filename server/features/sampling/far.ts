import { createFarTest, type FarTest, unitThatFits } from '../../../shared/rules/sample-plausible.ts';
import { sayReason } from '../../../shared/rules/sample-sentences.ts';
import type { Queryable } from '../../db/client.ts';
import type { SiteRow } from '../../http/rows.ts';
import { findMethod } from '../samples/points-repo.ts';
import { recentValues } from '../samples/recent-values.ts';

/** A result by hand, in the unit of its point. */
interface Result {
  samplePointId: number;
  methodId: number | null;
  value: number;
  unit: string;
}

/** The test against the last results that count at the point and method; null where they say too little. */
export async function farTest(
  db: Queryable,
  siteId: number,
  { samplePointId, methodId }: Result,
): Promise<FarTest | null> {
  const last = await recentValues(db, siteId, methodId, [samplePointId]);
  const method = methodId === null ? null : await findMethod(db, siteId, methodId);
  return createFarTest(last.get(samplePointId) ?? [], method?.reproducibility ?? null);
}

/** Why a result is held; null where it is not. */
export async function sayHeld(
  db: Queryable,
  site: SiteRow,
  result: Result & { heldSince: Date | null },
): Promise<string | null> {
  if (result.heldSince === null) return null;
  const { value, unit } = result;
  const test = await farTest(db, site.id, result);
  if (!test) return 'Held until somebody confirms it or asks for a re-test.';
  const fits = unitThatFits(value, unit, test.isFar);
  const figures = { value, unit, median: test.median, among: 'last', ...(fits !== null && { fits }) };
  return sayReason({ code: 'far-from-last', figures }, site.zone);
}
