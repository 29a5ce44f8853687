import type {
  ProposedMapping,
  SampleImportView,
  SampleMapping,
} from '../../../shared/contracts/sample-import.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import { countOutcomes, isToAdd, rowsToShow, showRow } from '../../../shared/rules/sample-outcomes.ts';
import { headOfSheet } from '../../../shared/rules/sample-file.ts';
import { completeMapping } from '../../../shared/rules/sample-mapping.ts';
import { type Proposal, proposeMapping } from '../../../shared/rules/sample-proposal.ts';
import { headOf } from '../../../shared/rules/sample-table.ts';
import type { Queryable } from '../../db/client.ts';
import { toWire } from '../../http/wire.ts';
import { type ImportRow, findSameFile, getImportView } from './imports-repo.ts';
import { recognisedAs } from './profiles.ts';
import {
  type DryRun,
  type FileRead,
  loadRegistry,
  readText,
  refuseForeign,
  runDry,
  unreadable,
} from './reading.ts';
import { receiptOf } from './receipt.ts';

const shownOfEach = 200;
const previewLines = 40;

const proposals = new WeakMap<FileRead, Promise<Proposal>>();

/** The proposal for a file, made once for as long as the file is held. */
function proposalOf(db: Queryable, row: ImportRow, file: FileRead): Promise<Proposal> {
  const known =
    proposals.get(file) ??
    loadRegistry(db, row.siteId, false).then((registry) => proposeMapping(file, registry));
  proposals.set(file, known);
  return known;
}

/** How the file itself shows that it may be read. */
export async function propose(db: Queryable, row: ImportRow, file: FileRead): Promise<ProposedMapping> {
  const proposal = await proposalOf(db, row, file);
  if (!proposal.ok) throw unreadable(row.fileName, proposal.problem);
  return proposal.proposed;
}

/** The beginning of a file, and what in it speaks for reading it as proposed. */
async function previewOf(
  db: Queryable,
  row: ImportRow,
  file: FileRead,
): Promise<SampleImportView['preview']> {
  const proposal = await proposalOf(db, row, file);
  if (!row.mapping && !proposal.ok) throw unreadable(row.fileName, proposal.problem);
  const proposed = row.mapping ? completeMapping(row.mapping) : proposal.ok ? proposal.proposed : null;
  const because = proposal.ok ? proposal.because : [];
  if (file.kind === 'text') {
    const head = headOf(file.text, previewLines);
    return { encoding: file.encoding, head, sheets: [], proposed: proposed!, because };
  }
  const sheets = file.sheets.map((sheet) => ({ name: sheet.name, head: headOfSheet(sheet, previewLines) }));
  const head = sheets.find(({ name }) => name === proposed!.sheet)?.head ?? sheets[0]!.head;
  return { encoding: null, head, sheets, proposed: proposed!, because };
}

/** How a file is read and what would become, or became, of each row. */
export async function viewImport(db: Queryable, row: ImportRow, now: Date): Promise<SampleImportView> {
  const file = await readText(db, row);
  const dry = row.mapping && (await dryRunThatFits(db, row, file, row.mapping, now));
  return viewOf(db, row, file, dry);
}

/** The view of an import whose rows have just been decided; `dry` is null while its mapping is open. */
export async function viewOf(
  db: Queryable,
  row: ImportRow,
  file: FileRead,
  dry: DryRun | null,
): Promise<SampleImportView> {
  const preview = await previewOf(db, row, file);
  return assemble(db, row, preview, dry && { mapping: completeMapping(row.mapping!), dry });
}

/** Null where what the mapping names has left the site since it was said: it must be said anew. */
export async function dryRunThatFits(
  db: Queryable,
  row: ImportRow,
  file: FileRead,
  mapping: SampleMapping,
  now: Date,
): Promise<DryRun | null> {
  try {
    if (row.state === 'uploaded') await refuseForeign(db, row.siteId, mapping);
    return await runDry(db, row, file, mapping, now);
  } catch (error) {
    if (error instanceof AppError && error.code === 'invalid-input') return null;
    throw error;
  }
}

async function assemble(
  db: Queryable,
  row: ImportRow,
  preview: SampleImportView['preview'],
  result: { mapping: SampleMapping; dry: DryRun } | null,
): Promise<SampleImportView> {
  const view = toWire(await getImportView(db, row.siteId, row.id));
  const counts = result && row.state === 'uploaded' ? countOutcomes(result.dry.rows) : view.counts;
  const shown = result ? rowsToShow(result.dry.rows, shownOfEach) : [];
  return {
    import: { ...view, counts },
    preview,
    rows: shown.map((decided) => showRow(decided, result!.mapping, result!.dry.registry)),
    outcome: result?.dry.outcome ?? null,
    notices: result?.dry.notices ?? [],
    sameAs: toWire(await findSameFile(db, row)),
    mends: row.mends,
    recognised: await recognisedAs(db, row, result?.dry.header ?? null),
    moreToAdd: row.state === 'committed' && result ? result.dry.rows.filter(isToAdd).length : 0,
    receipt: await receiptOf(db, row),
  };
}
