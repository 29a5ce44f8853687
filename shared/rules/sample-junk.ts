import type { SampleMapping, SampleReason } from '../contracts/sample-import.ts';
import { simplified } from './sample-header.ts';
import { looksNumeric } from './sample-number.ts';
import type { TableRow } from './sample-table.ts';
import { isKnownUnit } from './unit-convert.ts';

type Columns = { [Role in keyof SampleMapping['columns']]: number | null };

const unitsWithin = 3;
// Words with which reports begin their last lines; in English, German, French and Spanish, without accents.
const summaryWord =
  /^(grand |sub)?(total|sum|average|avg|mean|min(imum)?|max(imum)?|median|count|number of|std|st\.? ?dev|standard deviation|rsd|cv|range|summe|gesamt|mittel(wert)?|durchschnitt|anzahl|standardabweichung|somme|moyenne|ecart|nombre|suma|promedio|media|desviacion|cantidad|n ?=)(?![a-z])/;
const noteWord =
  /^(page|printed|print|report|exported?|export|created|generated|signed|approved by|remarks?|notes?|legend|end\b|end of|source|user|seite|gedruckt|erstellt|bericht|bemerkung|legende|ende|imprime|edite|page|fin\b|remarque|pagina|impreso|generado|informe|observacion|nota)/;
const unitShape = /^(?:\[[^\]]{0,20}\]|\([^)]{0,20}\)|[-–])$/;
const formatShape = /^[[(]?(?:[dmyhs]{1,4}[-./: ]?){2,8}[\])]?$/i;

const bare = (cell: string): string => cell.replace(/^[[(]|[\])]$/g, '').trim();

/** Is the cell what a row of units has in a column: a unit, a format of dates, or nothing? */
const isUnitLike = (cell: string): boolean =>
  cell === '' || unitShape.test(cell) || formatShape.test(cell) || isKnownUnit(bare(cell));

function isUnitsRow({ cells }: TableRow, columns: Columns): boolean {
  const value = columns.value === null ? '' : (cells[columns.value] ?? '').trim();
  if (value === '' || looksNumeric(value) || !isUnitLike(value) || /^[-–]$/.test(value)) return false;
  return cells.every(
    (cell) => isUnitLike(cell.trim()) || /^(text|string|number|date)$/i.test(bare(cell.trim())),
  );
}

/** The unit that the first rows below a header give for the values; null without a row of units. */
export function unitInRows(
  rows: readonly TableRow[],
  columns: Columns,
): { unit: string; line: number } | null {
  const row = rows.slice(0, unitsWithin).find((one) => isUnitsRow(one, columns));
  return row ? { unit: bare(row.cells[columns.value!]!.trim()), line: row.line } : null;
}

/** May a row that says nothing of a sample be passed over? Never one that holds a time or could be half a sample. */
function isNote(filled: readonly string[], width: number): boolean {
  if (filled.every((cell) => /^[-=_*#.\s]+$/.test(cell))) return filled.some((cell) => cell.length > 1);
  if (filled.length >= Math.max(2, width / 2)) return false;
  const first = simplified(filled[0]!).replace(/^[-*#= ]+/, '');
  if (noteWord.test(first)) return true;
  return filled.every((cell) => /[a-z]/i.test(cell) && /\s/.test(cell.trim()) && !/\d/.test(cell));
}

/**
 * Makes a finder of rows that are no samples: a row of units, the header once more, totals and averages, closing lines.
 * @param header cells of the line that names the columns
 * @returns a function from a row and its place below the header to why it is passed over, or null
 */
export function createJunkFinder(
  header: readonly string[],
  columns: Columns,
): (row: TableRow, place: number) => SampleReason | null {
  const names = header.map(simplified);
  const named = names.filter((name) => name !== '').length;
  const isHeader = (cells: readonly string[]) =>
    named > 1 && names.every((name, column) => name === simplified(cells[column] ?? ''));
  return (row, place): SampleReason | null => {
    const { cells } = row;
    const taken = columns.takenAt === null ? '' : (cells[columns.takenAt] ?? '').trim();
    // Whatever begins with a figure there is meant as a time, so the row is meant as a sample.
    if (/^\d/.test(taken)) return null;
    if (isHeader(cells)) return { code: 'repeated-header', figures: {} };
    if (place < unitsWithin && isUnitsRow(row, columns)) return { code: 'units-row', figures: {} };
    const filled = cells.map((cell) => cell.trim()).filter((cell) => cell !== '');
    const summary = filled.find((cell) => !looksNumeric(cell));
    if (summary && summaryWord.test(simplified(summary))) {
      return { code: 'summary-row', figures: { word: summary.slice(0, 40) } };
    }
    return isNote(filled, named) ? { code: 'note-row', figures: { text: filled[0]!.slice(0, 60) } } : null;
  };
}
