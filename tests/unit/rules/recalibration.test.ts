import { describe, expect, it } from 'vitest';
import {
  type EvidenceBasis,
  type EvidenceSample,
  gatherEvidence,
} from '../../../shared/rules/recalibration.ts';
import * as words from '../../../shared/rules/recalibration-sentences.ts';
import { randomFrom } from '../../../seeds/random.ts';
import type { CalibrationEvidence, Correction } from '../../../shared/contracts/calibration-evidence.ts';

const hour = 3_600_000;
const start = Date.UTC(2026, 8, 1);
const measure = { unit: '°C', decimals: 0 };

/** No-break spaces between number and unit are right on a page and invisible in a test. */
const plain = (text: string) => text.replaceAll('\u00a0', ' ');
const recommendation = (evidence: CalibrationEvidence) => plain(words.recommendation(evidence, measure));
const correctionWords = (correction: Correction) => plain(words.correctionWords(correction, measure));

const basis = (own: Partial<EvidenceBasis> = {}): EvidenceBasis => ({
  current: { slope: 1, offset: 0 },
  baseline: { code: 'revision', at: new Date(start).toISOString(), eventKind: null },
  labSd: 1.5,
  residualSd: 4,
  closedLoop: false,
  notCounted: [],
  ...own,
});

/** Samples every 8 hours of an estimate that reads `bias(i)` high, errors of SD 4; references wander over `spread`. */
function samplesOf(n: number, bias: (i: number) => number, own: { seed?: number; spread?: number } = {}) {
  const random = randomFrom(own.seed ?? 5);
  return Array.from({ length: n }, (_, i): EvidenceSample => {
    const reference = 1500 + (own.spread ?? 1) * random.normal();
    const raw = reference + bias(i) + 4 * random.normal();
    return { takenMs: start + i * 8 * hour, raw, reference, allowed: 10 };
  });
}

function evidenceOf(samples: EvidenceSample[], own: Partial<EvidenceBasis> = {}) {
  const found = gatherEvidence(samples, basis(own));
  if (!found.ok) throw new Error(`refused with ${found.counted} samples`);
  return found.evidence;
}
const errorsOf = (samples: readonly EvidenceSample[]) => samples.map(({ raw, reference }) => raw - reference);
const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;

describe('the evidence of a recalibration', () => {
  it('leaves a healthy estimate as found, with how small a bias its samples can show', () => {
    const evidence = evidenceOf(samplesOf(40, () => 0.3));
    expect(evidence).toMatchObject({
      recommended: 'as-found',
      signal: null,
      excluded: 0,
      used: 30,
      origins: 22,
    });
    expect(recommendation(evidence)).toMatch(
      /^Leave it: a bias of \d\.\d °C is within what 30 samples can show\.$/,
    );
  });

  it('corrects a standing bias by minus the mean error of the permitted samples, judged on later ones', () => {
    const samples = samplesOf(60, () => 15);
    const evidence = evidenceOf(samples);
    const permitted = samples.slice(evidence.excluded).slice(-30);
    expect(evidence.signal).toMatchObject({ direction: 'high', confirmed: true });
    expect(evidence.recommended).toBe('bias');
    const bias = evidence.candidates.find(({ kind }) => kind === 'bias')!;
    expect(bias.offset).toBeCloseTo(-mean(errorsOf(permitted)), 9);
    expect(bias.laterRmse!).toBeLessThan(6);
    expect(evidence.candidates[0]!.laterRmse!).toBeGreaterThan(13);
    expect(recommendation(evidence)).toMatch(
      /^Bias correction: set it to −1\d\.\d °C\. On \d+ later samples, each corrected by a fit to earlier ones only, the error falls from 1\d\.\d °C to [345]\.\d °C RMSE\.$/,
    );
  });

  it('fits nothing to samples up to a signal, and recommends nothing until 8 have come since', () => {
    const samples = samplesOf(60, (i) => (i < 40 ? 0 : 16));
    const first = Array.from({ length: 20 }, (_, k) => evidenceOf(samples.slice(0, 41 + k))).find(
      ({ signal }) => signal !== null,
    )!;
    expect(first).toMatchObject({ used: 0, recommended: null, origins: null });
    expect(first.excluded).toBeGreaterThan(41);
    expect(Date.parse(first.signal!.onsetAt)).toBeGreaterThanOrEqual(samples[36]!.takenMs);
    expect(recommendation(first)).toBe(
      'Not yet: a change was signalled, and no sample has come since; 8 are needed. The samples up to the signal would flatter any correction.',
    );
    const later = evidenceOf(samples);
    expect(later.excluded).toBe(first.excluded);
    const bias = later.candidates.find(({ kind }) => kind === 'bias')!;
    expect(bias.offset).toBeCloseTo(-mean(errorsOf(samples.slice(later.excluded).slice(-30))), 9);
  });

  it('offers a bias alone on 8 to 17 samples, and says that it is unproven', () => {
    const evidence = evidenceOf(
      samplesOf(12, () => 9),
      { residualSd: 30 },
    );
    expect(evidence).toMatchObject({ used: 12, origins: null, recommended: 'bias' });
    expect(evidence.candidates.map(({ kind }) => kind)).toEqual(['as-found', 'bias']);
    expect(recommendation(evidence)).toMatch(/and 12 samples show it\. Unproven until 10 later samples\.$/);
  });

  it('measures a bias on top of the correction in force', () => {
    const samples = samplesOf(60, () => 15);
    const alone = evidenceOf(samples).candidates.find(({ kind }) => kind === 'bias')!;
    const onTop = evidenceOf(samples, { current: { slope: 1, offset: -15 } });
    expect(onTop.recommended).toBe('as-found');
    expect(onTop.candidates[0]).toMatchObject({ slope: 1, offset: -15 });
    expect(Math.abs(alone.offset! + 15)).toBeLessThan(2);
  });

  it('finds a slope where references spread, and bars it for a closed loop or an unknown precision of the method', () => {
    const slanted = samplesOf(60, () => 0, { spread: 60 }).map((sample) => ({
      ...sample,
      raw: 1500 + (sample.raw - 1500) * 0.8,
    }));
    const free = evidenceOf(slanted, { residualSd: 14 });
    expect(['linear', 'deming']).toContain(free.recommended);
    const verdict = (own: Partial<EvidenceBasis>) =>
      evidenceOf(slanted, { residualSd: 14, ...own }).candidates.find(({ kind }) => kind === 'linear')!
        .verdict;
    expect(verdict({ closedLoop: true })).toBe('closed-loop');
    expect(verdict({ labSd: null })).toBe('precision-unknown');
  });

  it('asks for more where fewer than 8 samples count', () => {
    expect(
      gatherEvidence(
        samplesOf(7, () => 20),
        basis(),
      ),
    ).toEqual({ ok: false, counted: 7, needed: 8 });
    const reply = { ok: false as const, counted: 3, needed: 8, notCounted: [], baseline: basis().baseline };
    expect(words.evidenceRefusalSentence({ ...reply, reason: 'too-few-samples' })).toBe(
      'Only 3 samples count since the revision in force; 8 are needed to judge. Ask for samples, or have the duty waived with a reason.',
    );
    expect(words.evidenceRefusalSentence({ ...reply, reason: 'only-censored' })).toMatch(
      /beyond the method’s range/,
    );
    expect(words.evidenceRefusalSentence({ ...reply, reason: 'only-held' })).toMatch(/held for a re-test/);
  });
});

describe('a correction in words', () => {
  it('has a true minus sign, its unit and one more decimal than the estimate', () => {
    expect(correctionWords({ slope: 1, offset: -15.34 })).toBe('−15.3 °C');
    expect(correctionWords({ slope: 1, offset: 0 })).toBe('none');
    expect(correctionWords({ slope: 1, offset: 0.004 })).toBe('+0.004 °C');
    expect(correctionWords({ slope: 0.982, offset: 3.06 })).toBe('× 0.9820 + 3.1 °C');
    expect(correctionWords({ slope: 1.02, offset: -30 })).toBe('× 1.0200 − 30.0 °C');
  });

  it('says when the whole correction outgrows the model: beyond 2 and 3 times its own error', () => {
    const at = (offset: number) => words.clampSentence({ slope: 1, offset }, 1500, 4, measure);
    expect(at(-7.9)).toBeNull();
    expect(plain(at(-8.1)!)).toMatch(/^With 8\.1 °C the whole correction is more than twice/);
    expect(at(12.5)).toMatch(/more than 3 times .*review the model/);
  });
});
