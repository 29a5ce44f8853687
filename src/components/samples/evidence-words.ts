import type { SampleDateOrder } from '../../../shared/contracts/sample-import.ts';
import type { EvidencePart, FileEvidence } from '../../../shared/contracts/sample-evidence.ts';
import { dateOrderWords } from '../../../shared/rules/history-sentences.ts';
import { sayEvidence } from '../../../shared/rules/sample-evidence-sentences.ts';

/** How a file of samples may write its dates. */
const { 'epoch-s': _notHere, ...orderWords } = dateOrderWords;
export const sampleOrderWords: Record<SampleDateOrder, string> = {
  ...orderWords,
  'serial-days': 'Days since 1900, as spreadsheets count (45123.5)',
};

/** What in the file speaks for one part of how it is read; empty where nothing was found. */
export const sayBecause = (because: readonly FileEvidence[], of: EvidencePart, zone: string): string =>
  because
    .filter((one) => one.of === of)
    .map((one) => sayEvidence(one, zone))
    .join(' ');
