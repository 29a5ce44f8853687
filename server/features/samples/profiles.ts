import { AppError } from '../../../shared/contracts/errors.ts';
import type { SampleImportView, SampleMapping } from '../../../shared/contracts/sample-import.ts';
import type { SampleReasonCode } from '../../../shared/contracts/sample-import.ts';
import type { ImportProfile } from '../../../shared/contracts/sample-profiles.ts';
import {
  type KnownProfile,
  nameFrom,
  profileOf,
  recogniseFile,
  signatureOf,
} from '../../../shared/rules/import-profile.ts';
import type { Context } from '../../context.ts';
import type { Queryable, Tx } from '../../db/client.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { toWire } from '../../http/wire.ts';
import { recordAudit } from '../audit/service.ts';
import type { By } from './imports.ts';
import type { ImportRow } from './imports-repo.ts';
import {
  type ProfileRow,
  findProfile,
  knownProfiles,
  listProfiles,
  rememberProfile,
  sameKindInUse,
  setProfile,
} from './profiles-repo.ts';
import { type DryRun, type FileRead, cutsOf, refuseForeign, runDry } from './reading.ts';

/** What speaks against reading a whole file so, rather than against single rows. */
const misread: SampleReasonCode[] = [
  'text-value',
  'unreadable-time',
  'impossible-date',
  'impossible-time',
  'ahead',
];
const mostMisread = 0.2;

/**
 * Reads a file as those with the same columns were read before. Where that would make nonsense of many rows, as after
 * the laboratory's system changed its dates, the profile is named but not taken.
 */
export async function recognise(
  db: Queryable,
  row: ImportRow,
  file: FileRead,
  now: Date,
): Promise<{ profile: KnownProfile; mapping: SampleMapping | null; dry: DryRun | null } | null> {
  const known = recogniseFile(cutsOf(file), await knownProfiles(db, row.siteId));
  if (!known) return null;
  const { profile, mapping } = known;
  try {
    await refuseForeign(db, row.siteId, mapping);
    const dry = await runDry(db, row, file, mapping, now);
    const wrong = dry.rows.filter(({ reasons }) => reasons.some(({ code }) => misread.includes(code)));
    if (wrong.length <= mostMisread * dry.rows.length) return { profile, mapping, dry };
  } catch (error) {
    if (!(error instanceof AppError) || error.code !== 'invalid-input') throw error;
  }
  return { profile, mapping: null, dry: null };
}

/** The profile that an import goes by, and whether it is read as that says. */
export async function recognisedAs(
  db: Queryable,
  row: ImportRow,
  header: readonly string[] | null,
): Promise<SampleImportView['recognised']> {
  const profile = row.profileId === null ? null : await findProfile(db, row.siteId, row.profileId);
  if (!profile) return null;
  const own = row.mapping && header ? profileOf(row.mapping, header) : null;
  return {
    profileId: profile.id,
    name: profile.name,
    taken: own !== null && sameReading(own, profile.mapping),
  };
}

const sameReading = (a: ProfileRow['mapping'], b: ProfileRow['mapping']): boolean => {
  const said = ({ columns, ...rest }: ProfileRow['mapping']) =>
    JSON.stringify([Object.entries(rest).sort(), Object.entries(columns).sort()]);
  return said(a) === said(b);
};

/** What a person accepted by adding a file is how the next with the same columns is read. */
export async function remember(
  tx: Tx,
  by: By,
  row: ImportRow,
  header: readonly string[],
  now: Date,
): Promise<number> {
  const { siteId, fileName } = row;
  const mapping = profileOf(row.mapping!, header);
  const made = { siteId, name: nameFrom(fileName), signature: signatureOf(header), mapping };
  return (await rememberProfile(tx, { ...made, by: by.actor.id, at: now })).id;
}

const shown = ({ name, archivedAt }: ProfileRow) => ({ name, archived: archivedAt !== null });

/** Renames a profile, forgets it (files of the kind are then asked about anew) or takes it back. */
export async function changeProfile(
  context: Context,
  by: By,
  row: Permitted<ProfileRow>,
  body: { name: string; archived: boolean; version: number },
): Promise<ImportProfile> {
  return context.db.transaction(async (tx) => {
    const before = await lockRow(tx, 'importProfile', row);
    const current = async () => toWire((await listProfiles(tx, row.siteId, row.id))[0]!);
    if (before.version !== body.version) {
      const message = 'Somebody else changed this profile meanwhile. What stands now is shown.';
      throw new AppError('stale', message, { current: { ...(await current()) } });
    }
    if (!body.archived && before.archivedAt !== null && (await sameKindInUse(tx, before))) {
      throw new AppError(
        'conflict',
        'Files of this kind have another profile by now. Forget that one first.',
      );
    }
    const archivedAt = body.archived ? (before.archivedAt ?? context.clock()) : null;
    const after = await setProfile(tx, row, { name: body.name, archivedAt, version: before.version + 1 });
    await recordAudit(tx, {
      at: context.clock(),
      siteId: row.siteId,
      ...by,
      action: 'change',
      entity: 'import-profile',
      entityId: row.id,
      entityName: after.name,
      before: shown(before),
      after: shown(after),
    });
    return current();
  });
}
