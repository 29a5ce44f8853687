import type { SheetFields } from '../../shared/contracts/register.ts';

let count = 0;

/** A complete data sheet as a person would type it; what a test cares about is given. */
export function sheetFields(own: Partial<SheetFields> & Pick<SheetFields, 'unitId'>): SheetFields {
  return {
    tagName: `AY-${1000 + count++}`,
    name: 'Residual carbonate',
    quantity: 'composition',
    unit: '%',
    decimals: 2,
    rangeLow: null,
    rangeHigh: null,
    purpose: '',
    importanceClass: 'C',
    consumers: [{ kind: 'display', name: 'control room' }],
    samplePointId: null,
    methodId: null,
    transportDelayMs: 0,
    pairingWindowMs: 0,
    samplingPlan: null,
    steadyStateGate: false,
    promisedReferenceMs: 86_400_000,
    allowedErrorAbsolute: 1,
    allowedErrorPercent: null,
    allowedSpread: null,
    historyArrives: 'uploaded',
    historyEveryMs: 86_400_000,
    correctionMode: 'propose',
    updateFactor: 0.2,
    recalibrationInterval: { every: 6, unit: 'months', counted: 'last-done', anchorOn: null },
    reviewInterval: { every: 12, unit: 'months', counted: 'last-done', anchorOn: null },
    fallback: 'Use the laboratory value.',
    limitations: '',
    ownerId: null,
    deputyId: null,
    approverId: null,
    ...own,
  };
}
