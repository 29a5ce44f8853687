import { boardFigures } from './board.ts';
import { clientFigures } from './client-size.ts';
import type { Figure } from './figure.ts';
import { judgingFigures } from './judging.ts';
import { filterFigures } from './filters.ts';
import { historyFigures } from './history-import.ts';
import { replayFigures } from './replay.ts';
import { sampleFigures } from './sample-import.ts';

const suites: Record<string, () => Promise<Figure[]>> = {
  history: () => historyFigures(databaseUrl()),
  samples: () => sampleFigures(databaseUrl()),
  board: () => boardFigures(databaseUrl()),
  replay: () => replayFigures(databaseUrl()),
  client: clientFigures,
  judging: judgingFigures,
  filters: filterFigures,
};

function databaseUrl(): string {
  const url = process.env.BENCH_DATABASE_URL;
  if (!url)
    throw new Error('BENCH_DATABASE_URL is not set. Run `npm run bench`, which starts PostgreSQL for it.');
  return url;
}

const asked = process.argv.slice(2).filter((word) => !word.startsWith('--'));
const json = process.argv.includes('--json');
const figures: Figure[] = [];
for (const [name, measure] of Object.entries(suites)) {
  if (asked.length > 0 && !asked.includes(name)) continue;
  if (!json) process.stderr.write(`measuring ${name} …\n`);
  const found = await measure();
  figures.push(...found);
  if (json) for (const figure of found) console.log(JSON.stringify(figure));
}
if (!json) console.log(tableOf(figures));
process.exit(figures.some((figure) => figure.met === false) ? 1 : 0);

/** One table for people: what was measured, against whom, and whether the target is met. */
function tableOf(rows: readonly Figure[]): string {
  const number = (value: number | null, digits = 4) =>
    value === null ? 'skipped' : Number(value.toPrecision(digits)).toLocaleString('en');
  const verdict = (figure: Figure) =>
    figure.met === null
      ? figure.target === null
        ? 'for information'
        : 'skipped'
      : figure.met
        ? 'met'
        : 'MISSED';
  const cells = [
    ['figure', 'value', 'peer', 'peer’s', 'ratio', 'target', ''],
    ...rows.map((figure) => [
      figure.name,
      `${number(figure.value)} ${figure.unit}`,
      figure.peer || '–',
      figure.peer ? `${number(figure.peerValue)} ${figure.peerValue === null ? '' : figure.unit}` : '–',
      figure.ratio === null ? '–' : number(figure.ratio, 3),
      figure.target === null ? '–' : `≤ ${number(figure.target, 3)}`,
      verdict(figure),
    ]),
  ];
  const widths = cells[0]!.map((_, column) => Math.max(...cells.map((row) => row[column]!.length)));
  return cells
    .map((row) =>
      row
        .map((cell, column) => cell.padEnd(widths[column]!))
        .join('  ')
        .trimEnd(),
    )
    .join('\n');
}
