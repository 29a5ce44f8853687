import type { ProposedMapping } from '../contracts/sample-import.ts';
import { looksLikeTime } from './local-time.ts';
import { noColumns } from './sample-mapping.ts';
import { looksNumeric } from './sample-number.ts';
import type { TableRow } from './sample-table.ts';

type Columns = ProposedMapping['columns'];
type Role = keyof Columns;

const number = String.raw`(?:no|nr|num|number|id|code|n°|nummer|kennung|numero)`;

/**
 * Words of headers in English, German, French and Spanish, without accents; the telling ones first. A column that fits an
 * earlier role is not asked for a later one. Common practice of plant and laboratory exports, no single source.
 */
const roleWords: [Role, RegExp[]][] = [
  [
    'analyst',
    [
      /\banal(yst|yste|ytiker|ista)\b/,
      /\b(analy[sz]ed|tested|measured) by\b/,
      /\b(operator|technician|laborant|bearbeiter|prufer|operateur|operador)\b/,
    ],
  ],
  [
    'reportedAt',
    [
      /report/,
      /\b(result|approved|validated|released|completed) (time|date|at|on)\b/,
      /\b(ergebnis|analysen?|befund|freigabe|berichts?)[- ]?(datum|zeit|zeitpunkt)/,
      /\b(freigegeben|gemeldet|validiert)\b/,
      /\b(date|heure) (d'|de |du |de l')?(analyse|resultat|validation|rapport)/,
      /\bfecha (de |del )?(analisis|resultado|informe|validacion)/,
      /\b(analy[sz]ed|analysiert|analysee?|analizado|validee?|validado)\b/,
    ],
  ],
  [
    'samplePoint',
    [
      /\bpoint\b/,
      /(messstelle|entnahmestelle|entnahmeort|probenahmestelle|probenahmeort|probenort|probenstelle)/,
      /\b(punto|lieu|emplacement|lugar|ubicacion)\b/,
      /\b(location|position|stream)\b/,
    ],
  ],
  [
    'takenFrom',
    [
      /\b(taken|sampled|sampling|sample|composite|collection) (from|start|begin)/,
      /^(start|from|beginn|von|debut|inicio|desde)\b/,
      /\b(start|beginn|debut|inicio) /,
    ],
  ],
  [
    'sampleNumber',
    [
      new RegExp(String.raw`\b(sample|proben?|lab|lims|labor)[- ]?${number}\b`),
      new RegExp(String.raw`${number}\s?(d'|de |de la |del )?(echantillon|muestra|probe|sample)\b`),
      /^(id|no|nr|n°|number|sample|probe|echantillon|muestra|ref|reference|referencia)$/,
    ],
  ],
  [
    'takenAt',
    [
      /\b(taken|sampled|sampling|collected|drawn)\b/,
      /\bsample (time|date)\b/,
      /(entnahme|entnommen|probenahme|probennahme|gezogen|prelev|muestreo|\btoma\b|tomada)/,
      /^(date|time|timestamp|datum|zeit|zeitpunkt|zeitstempel|uhrzeit|heure|horodatage|fecha|hora|ende|fin|bis|hasta)\b/,
    ],
  ],
  ['unit', [/^(units?|einheit|unite|unidad)\b/, /\buom\b/]],
  [
    'value',
    [
      /^(value|result|reading|wert|messwert|ergebnis|resultat|valeur|mesure|valor|resultado)\b/,
      /\b(value|result|reading|measured)\b/,
      /(messwert|ergebnis|\bwert)/,
    ],
  ],
];

/** A header without accents, underscores, full stops after words and doubled spaces, in lower case. */
export const simplified = (header: string): string =>
  header
    .normalize('NFKD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .replaceAll('_', ' ')
    .replace(/\s+/g, ' ')
    .replace(/\.(?=\s|$)/g, '')
    .trim();

/** What the words of a header say of its columns; null where they say nothing. */
export function columnsByWords(header: readonly string[]): Columns {
  const columns: Columns = { ...noColumns };
  const words = header.map(simplified);
  const taken = new Set<number>();
  for (const [role, patterns] of roleWords) {
    for (const pattern of patterns) {
      const column = words.findIndex((text, index) => !taken.has(index) && pattern.test(text));
      if (column === -1) continue;
      columns[role] = column;
      taken.add(column);
      break;
    }
  }
  // A start without an end is simply the time.
  if (columns.takenAt === null && columns.takenFrom !== null) {
    return { ...columns, takenAt: columns.takenFrom, takenFrom: null };
  }
  return columns;
}

const holdsFigures = (cells: readonly string[]): boolean =>
  cells.some((cell) => looksNumeric(cell) || looksLikeTime(cell));

export interface HeaderFound {
  /** Of the row. */
  index: number;
  /** Names that are known words; empty where the line was found by what stands below it. */
  names: string[];
}

/**
 * Finds the line that names the columns: the one of the first hundred lines that holds the most known words, else the
 * first line of words above a line with figures.
 * @returns null where no line names anything
 */
export function findHeader(rows: readonly TableRow[]): HeaderFound | null {
  let best: HeaderFound | null = null;
  const head = rows.filter(({ line }) => line <= 100);
  for (const [index, { cells }] of head.entries()) {
    if (holdsFigures(cells)) continue;
    const columns = columnsByWords(cells);
    const names = Object.values(columns).flatMap((column) =>
      column === null ? [] : [cells[column]!.trim()],
    );
    if (names.length >= 2 && names.length > (best?.names.length ?? 0)) best = { index, names };
  }
  if (best) return best;
  const index = head.findIndex(
    ({ cells }, at) =>
      cells.filter((cell) => cell.trim() !== '').length >= 2 &&
      !holdsFigures(cells) &&
      head[at + 1]?.cells.some(looksNumeric) === true,
  );
  return index === -1 ? null : { index, names: [] };
}
