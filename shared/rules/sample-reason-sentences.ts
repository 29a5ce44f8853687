import type { SampleReason, SampleReasonCode } from '../contracts/sample-import.ts';
import {
  formatClock,
  formatCount,
  formatDate,
  formatInstant,
  formatNumber,
  formatQuantity,
  monthNames,
  plural,
  zoneOffsetMinutes,
} from './format.ts';
import type { NumberDamage } from './sample-damage.ts';
import type { NoConversion } from './unit-convert.ts';

type Figures = SampleReason['figures'];

/** Offset of a zone at an instant as a file would write it: "+02:00". */
function offsetText(instant: string, zone: string): string {
  const minutes = zoneOffsetMinutes(instant, zone);
  const two = (count: number) => String(count).padStart(2, '0');
  return `${minutes < 0 ? '-' : '+'}${two(Math.floor(Math.abs(minutes) / 60))}:${two(Math.abs(minutes) % 60)}`;
}

const clockWithOffset = (instant: string, zone: string) =>
  `${formatClock(instant, zone)}${offsetText(instant, zone)}`;
const timeWords: Record<string, string> = {
  reported: 'The time of reporting',
  from: 'The time at which gathering began',
};
const whichTime = ({ column }: Figures) => timeWords[String(column)] ?? 'The time of taking';

/** A figure with the digits it has, six at most of those that count. */
function amount(figure: string | number | undefined, unit: string | number | undefined = ''): string {
  const value = Number(Number(figure).toPrecision(6));
  const decimals = /\.(\d+)$/.exec(String(value))?.[1]?.length ?? 0;
  return unit === '' ? formatNumber(value, decimals) : formatQuantity(value, String(unit), decimals);
}

function impossibleDate({ day, month, year, column }: Figures): string {
  const name = monthNames[Number(month) - 1];
  const where = column === 'reported' ? ' (in the time of reporting)' : '';
  if (!name) return `There is no month ${month}${where}. Is the order of day and month the other way round?`;
  const leap = month === 2 && day === 29 ? ` ${year}` : '';
  return `${day} ${name}${leap} does not exist${where}. Write the right date in the file.`;
}

function skippedOrDouble(code: 'missing-hour' | 'double-hour', figures: Figures, zone: string): string {
  const earlier = String(figures.earlier);
  const later = String(figures.later);
  const either = `${clockWithOffset(earlier, zone)} or ${clockWithOffset(later, zone)}`;
  if (code === 'missing-hour') {
    return `“${figures.written}” did not occur: the clocks were put forward. Write the time that is meant, ${either}.`;
  }
  return (
    `${whichTime(figures)} “${figures.written}” occurred twice, as the clocks were put back: at ${formatClock(earlier, 'UTC')} and ` +
    `${formatClock(later, 'UTC')} UTC. Write it with its offset, ${either}.`
  );
}

const noConversionWords: Record<NoConversion, string> = {
  kind: 'the two are of different kinds',
  pressure: 'gauge and absolute pressure differ by the pressure of the air',
  share: 'shares of mass, volume and substance differ',
  unknown: 'it is no unit that is known here',
  impossible: 'no such value can be',
};
function otherUnit({ unit, expected, why }: Figures): string {
  const because = noConversionWords[String(why) as NoConversion];
  return `In ${unit}, but samples of this point are in ${expected}. It can’t be converted${because ? `: ${because}` : ''}.`;
}

const damageWords: Record<NumberDamage, string> = {
  exponent: 'a power of ten that a spreadsheet made of a longer number',
  date: 'a date that a spreadsheet made of a number such as 5-10',
  error: 'an error of a spreadsheet',
};

function farFromLast({ value, unit, median, among, fits, thousand }: Figures): string {
  const others = among === 'file' ? 'the others of this file' : 'the last results';
  const far = `${amount(value, unit)} lies far from ${others} of this point (median ${amount(median, unit)}).`;
  if (thousand !== undefined) {
    const size = thousand === 'times' ? 'a thousand times as large' : 'a thousandth of it';
    return `${far} It would fit if it were ${size}: is the decimal sign right? Held until somebody confirms or mends it.`;
  }
  return fits === undefined
    ? `${far} Held until somebody confirms it or asks for a re-test.`
    : `${far} It would fit if it were in ${fits}. Held: write the unit anew, or confirm it.`;
}

function repeatabilityUnknown({ values, unit, known, count }: Figures): string {
  const apart = `${plural(Number(count), 'result')} of one sample (${values}${unit === '' ? '' : ` ${unit}`})`;
  return Number(known) === 1
    ? `${apart} are more than are averaged without being looked at: held.`
    : `${apart}, and no repeatability r of the method to judge them by: held. Choose a method with r, or confirm the mean.`;
}

function storedDiffers(figures: Figures, zone: string): string {
  const taken = String(figures.taken);
  const when = taken.length === 10 ? formatDate(taken, zone) : formatInstant(taken, zone);
  const limit = figures.qualifier === '' ? '' : `${figures.qualifier} `;
  const stands = `${limit}${figures.value} ${figures.unit}`.trim();
  if (figures.differs === 'method') {
    return `This sample is stored with another method, or with none where this file has one (${stands}, taken ${when}).`;
  }
  return `This sample is stored with another ${figures.differs}: ${stands}, taken ${when}. A file does not overwrite a stored result: record a correction or a re-test under Samples, or leave the row out.`;
}

const sentences: Record<SampleReasonCode, (figures: Figures, zone: string) => string> = {
  ragged: ({ expected, found }) =>
    `${plural(Number(found), 'cell')} where the header has ${formatCount(Number(expected))}. Is a delimiter missing, or is one inside a text without quotation marks?`,
  'no-value': ({ written }) =>
    `No value${written === '' ? '' : `, only “${written}”`}. Write it in the file, or leave the row out.`,
  'text-value': ({ written }) => `“${written}” is no number as this file writes them.`,
  'no-time': () => 'No time of taking. Write it in the file.',
  'unreadable-time': (figures) =>
    `${whichTime(figures)}, “${figures.written}”, can’t be read. One looks like 2026-11-29 06:00.`,
  'impossible-date': impossibleDate,
  'impossible-time': (figures) => `${whichTime(figures)}, “${figures.written}”, is no time of day.`,
  'missing-hour': (figures, zone) => skippedOrDouble('missing-hour', figures, zone),
  'double-hour': (figures, zone) => skippedOrDouble('double-hour', figures, zone),
  ahead: (figures) =>
    `${whichTime(figures)}, “${figures.written}”, is still to come. Check date, order of day and month, and zone.`,
  'before-1970': (figures) =>
    `${whichTime(figures)}, “${figures.written}”, lies before 1970. Check the year.`,
  'reported-before-taken': ({ reported }) =>
    `Reported before it was taken (“${reported}”). One of the two times is wrong.`,
  'no-point': () => 'No sample point. Write it in the file, or choose one for the whole file.',
  'unknown-point': ({ point }) =>
    `There is no sample point ${point} at this site. Say which point it is, or add it under Points and methods.`,
  'no-unit': ({ expected }) => `No unit; samples of this point are in ${expected}.`,
  'other-unit': otherUnit,
  'long-number': ({ length, most }) => `The sample number has ${length} characters; ${most} are the most.`,
  'other-value-in-file': ({ line, value, unit }) =>
    `Row ${formatCount(Number(line))} gives this sample as ${`${value} ${unit}`.trim()}. Keep the right one of the two.`,
  'stored-differs': storedDiffers,
  'same-row': ({ line }) => `The same sample as row ${formatCount(Number(line))}.`,
  unchanged: () => 'Stored before, unchanged.',
  censored: ({ qualifier }) =>
    `${qualifier === '<' ? 'Below' : 'Above'} the method’s range: kept, not used to judge the estimate.`,
  'ends-before-start': ({ from }) =>
    `Taken before gathering began (“${from}”). One of the two times is wrong.`,
  'long-composite': ({ days, most }) =>
    `Gathered over ${formatCount(Number(days))} days; ${most} are the most. One of the two times is wrong.`,
  'damaged-number': ({ written, damage }) =>
    `The sample number “${written}” is ${damageWords[String(damage) as NumberDamage]}. Write the right one.`,
  'far-from-last': farFromLast,
  'beyond-repeatability': ({ values, unit, range, limit }) =>
    `Results of one sample (${values}${unit === '' ? '' : ` ${unit}`}) lie ${amount(range, unit)} apart, more than the repeatability allows (${amount(limit, unit)}): held.`,
  'repeatability-unknown': repeatabilityUnknown,
  composite: ({ hours }) =>
    Number(hours) === 0
      ? 'A composite, gathered over a time that is not said: kept as of its day, never compared.'
      : `A composite over ${amount(hours)} h: compared with the average of the estimate over that time.`,
  converted: ({ from, fromUnit, to, toUnit }) =>
    `Converted from ${amount(from, fromUnit)} to ${amount(to, toUnit)}.`,
  averaged: ({ values, unit, mean }) =>
    `The mean of ${values}${unit === '' ? '' : ` ${unit}`}: ${amount(mean, unit)}.`,
  'averaged-into': ({ line }) => `Counted in the mean on row ${formatCount(Number(line))}.`,
  'like-report-time': ({ like }) =>
    like === 'upload'
      ? 'Taken at the very minute this file came in: perhaps the time of the export.'
      : 'The time of taking is the time of the result: perhaps not when it was taken.',
  'units-row': () => 'A row of units.',
  'repeated-header': () => 'The header once more.',
  'summary-row': ({ word }) => `“${word}”: a figure over other rows, no sample.`,
  'note-row': ({ text }) => `“${text}”: a note, no sample.`,
  'left-out': () => 'Left out by hand.',
  'date-only': () => 'A date without a time: kept, never compared with the estimate.',
};

/**
 * Says why a row fares as it does and what to do about it.
 * @param reason the code with its figures
 * @param zone IANA zone in which the file is read
 */
export const sayReason = ({ code, figures }: SampleReason, zone: string): string =>
  sentences[code](figures, zone);
