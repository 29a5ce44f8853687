const english = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'];
const others = [
  'Mär',
  'Mrz',
  'Mai',
  'Okt',
  'Dez',
  'Fév',
  'Avr',
  'Juin',
  'Juil',
  'Août',
  'Déc',
  'Ene',
  'Abr',
  'Ago',
  'Dic',
];
// As spreadsheets write them; "MAR-17" in capitals may well be a number of a laboratory.
const months = [...english, ...others].flatMap((month) => [month, month.toLowerCase()]).join('|');
const dayAndMonth = new RegExp(String.raw`^\d{1,2}[-. ]{1,2}(?:${months})[a-zûé]*\.?(?:[-. ]\d{2,4})?$`);
const monthAndYear = new RegExp(String.raw`^(?:${months})[- ]\d{2}$`);

/** What a spreadsheet made of a sample number: a power of ten, a date, or the word of an error. */
export type NumberDamage = 'exponent' | 'date' | 'error';

/**
 * Does a sample number look as a spreadsheet leaves it behind? "1.2E+05" was a long number or "12E4", "10-May" was
 * "5-10" or "10-5"; what it was can't be known any more.
 * @param inWorkbook a date cell comes as an ISO date there, which in a text file may be a number in its own right
 * @returns null for a number that may be right
 */
export function damageOf(sampleNumber: string, inWorkbook: boolean): NumberDamage | null {
  if (/^\d(?:[.,]\d+)?e\+\d{2,3}$/i.test(sampleNumber)) return 'exponent';
  if (/^#(?:N\/A|REF!|VALUE!|NAME\?|DIV\/0!|NUM!|NULL!|SPILL!)$/i.test(sampleNumber)) return 'error';
  if (dayAndMonth.test(sampleNumber) || monthAndYear.test(sampleNumber)) return 'date';
  return inWorkbook && /^\d{4}-\d{2}-\d{2}(?: \d{2}:\d{2}:\d{2})?$/.test(sampleNumber) ? 'date' : null;
}
