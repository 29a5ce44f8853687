import type { EvidenceCode, FileEvidence, FileNotice, NoticeCode } from '../contracts/sample-evidence.ts';
import { formatCount, formatNumber, plural } from './format.ts';

type Figures = FileEvidence['figures'];
const count = (figure: Figures[string] | undefined): string => formatCount(Number(figure));

const signWords = (sign: unknown) => (sign === ',' ? 'comma' : 'point');

function decimal({ sign, count: shown, other, all }: Figures): string {
  const against = Number(other) === 0 ? 'none' : count(other);
  const otherSign = sign === ',' ? 'point' : 'comma';
  return `Decimal ${signWords(sign)}: ${count(shown)} of ${plural(Number(all), 'value')} have one, ${against} a ${otherSign}.`;
}

function dateOrder({ order, line, shown, place, count: days }: Figures): string {
  const words = order === 'month-day-year' ? 'Month before day' : 'Day before month';
  const more = Number(days) > 1 ? `, as have ${count(Number(days) - 1)} more` : '';
  return `${words}: row ${count(line)} has ${shown} in ${place} place${more}.`;
}

const sentences: Record<EvidenceCode, (figures: Figures, zone: string) => string> = {
  'sheet-most-like': ({ sheet, rows, sheets }) =>
    `Sheet “${sheet}” of ${sheets}: it looks most like a table of samples (${plural(Number(rows), 'row')}).`,
  'header-names': ({ line, names }) => `Header on line ${count(line)}: it names ${names}.`,
  'header-above-figures': ({ line }) => `Header on line ${count(line)}: words above a line with figures.`,
  'columns-by-cells': ({ names }) => `Known by what stands below, not by the name: ${names}.`,
  decimal,
  'decimal-open': ({ open, all }) =>
    `Decimal sign open: ${count(open)} of ${plural(Number(all), 'value')} look like 1,234, which is a thousand or a little more than one.`,
  'decimal-mixed': ({ points, commas }) =>
    `Decimal sign open: ${plural(Number(points), 'value')} with a point and ${count(commas)} with a comma contradict each other.`,
  'no-decimal': ({ all }) => `No decimal sign in any of ${plural(Number(all), 'value')}.`,
  'numbers-as-numbers': () => 'The workbook holds its values as numbers, so no sign is to be told.',
  'date-order': dateOrder,
  'date-order-open': () => 'Day and month open: no day of this file is above 12.',
  'date-order-mixed': ({ dayFirst, monthFirst, dayLine, monthLine }) =>
    `Day and month open: ${plural(Number(dayFirst), 'day')} above 12 in first place (row ${count(dayLine)}) and ${count(monthFirst)} in second place (row ${count(monthLine)}).`,
  'year-first': () => 'Dates begin with the year.',
  'month-in-words': () => 'Months are written in words.',
  milliseconds: () => 'Times are milliseconds since 1970, in UTC.',
  'serial-dates': ({ serials, all }) =>
    `Times are days as spreadsheets count them: ${count(serials)} of ${count(all)} look like 45123.5.`,
  'offsets-in-cells': ({ all }) => `Every one of ${plural(Number(all), 'time')} has its offset.`,
  'zone-of-site': ({ zone, offsets }) =>
    Number(offsets) === 0
      ? `No offsets in the file: read on the clock of ${zone}.`
      : `${plural(Number(offsets), 'time has its offset', 'times have their offset')}; the others are read on the clock of ${zone}.`,
  'zone-skips-hours': ({ count: skipped, line, zone }) =>
    `Zone open: ${plural(Number(skipped), 'time falls', 'times fall')} into the hour that clocks of ${zone} leave out (row ${count(line)}), so the file may be on another clock, such as UTC or winter time all year.`,
  'unit-in-header': ({ unit }) => `Unit ${unit}: it stands in the header.`,
  'unit-in-row': ({ unit, line }) => `Unit ${unit}: it stands in the row of units, row ${count(line)}.`,
  'unit-open': () => 'Unit open: the file does not say it.',
  'missing-words': ({ words, count: met }) => `${plural(Number(met), 'cell')} without a result (${words}).`,
};

/**
 * Says what in a file speaks for one way of reading it: "Decimal comma: 398 of 404 values have one, none a point."
 * @param zone IANA zone of the site
 */
export const sayEvidence = ({ code, figures }: FileEvidence, zone: string): string =>
  sentences[code](figures, zone);

const notices: Record<NoticeCode, (figures: Figures) => string> = {
  'title-lines': ({ count: lines }) =>
    `${plural(Number(lines), 'line')} above the header ${Number(lines) === 1 ? 'is' : 'are'} passed over.`,
  'times-like-report': ({ count: rows, all }) =>
    `In ${count(rows)} of ${plural(Number(all), 'row')} the time of taking is the time of the result or of the export. Check that the right column was chosen: an estimate is compared at the time of taking.`,
  'rounded-times': ({ count: rows, all }) =>
    `${count(rows)} of ${plural(Number(all), 'time')} are full or half hours: perhaps the times planned, not those at which samples were taken.`,
  'lost-zeros': ({ count: rows, example, length }) =>
    `${plural(Number(rows), 'sample number')} such as “${example}” may have lost zeros in front: others have ${length} digits.`,
  'moved-from-last': ({ point, count: rows, median, before, unit }) =>
    `All ${count(rows)} results at ${point} lie far from the last ones (median ${formatFigure(median)} after ${formatFigure(before)}${unit === '' ? '' : ` ${unit}`}). They agree with each other, so they are let in.`,
};

function formatFigure(figure: Figures[string] | undefined): string {
  const value = Number(Number(figure).toPrecision(6));
  return formatNumber(value, /\.(\d+)$/.exec(String(value))?.[1]?.length ?? 0);
}

/** Says what strikes in a file as a whole. */
export const sayNotice = ({ code, figures }: FileNotice): string => notices[code](figures);
