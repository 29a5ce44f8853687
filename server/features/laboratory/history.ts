import type { SampleHistory } from '../../../shared/contracts/standing-samples.ts';
import type { Queryable } from '../../db/client.ts';
import { toWire } from '../../http/wire.ts';
import { getSite } from '../sites/repo.ts';
import { decidedOn, listDeeds, listVersions, type SampleRow, versionIds } from './repo.ts';
import { listRetestsOf } from './retests-repo.ts';

/** All versions of a sample, what was done with it and what was decided on it. */
export async function readHistory(
  db: Queryable,
  { siteId, id }: Pick<SampleRow, 'siteId' | 'id'>,
): Promise<SampleHistory> {
  const ids = await versionIds(db, siteId, id);
  const versions = await listVersions(db, siteId, ids);
  const { name, zone } = await getSite(db, siteId);
  return {
    currentId: versions[0]!.id,
    siteName: name,
    siteZone: zone,
    versions: toWire(versions),
    deeds: toWire(await listDeeds(db, siteId, ids)),
    decisions: await decidedOn(db, siteId, ids),
    retests: toWire(await listRetestsOf(db, siteId, ids)),
  };
}
