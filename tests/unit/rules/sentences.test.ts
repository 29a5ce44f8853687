import { describe, expect, it } from 'vitest';
import type { HealthReason } from '../../../shared/contracts/judging.ts';
import { boardHeadline, boardSubline } from '../../../shared/rules/board-sentences.ts';
import { healthSentence } from '../../../shared/rules/sentences.ts';

const measure = { unit: '°C', decimals: 0 };
const counts = { total: 52, fit: 41, watch: 6, unfit: 3, unproven: 2, unfitInClosedLoop: 1 };

describe('sentences', () => {
  it('say what is wrong, how much and how sure', () => {
    const reason: HealthReason = {
      code: 'bias-beyond-allowed',
      health: 'unfit',
      figures: { bias: 15.27, low: 12.2, high: 18.34, n: 12, allowed: 10 },
    };
    expect(healthSentence(reason, measure).replaceAll('\u00a0', ' ')).toBe(
      'Reads 15.3 °C high (95 % interval 12.2 to 18.3) over the last 12 samples; allowed error 10 °C.',
    );
  });

  it('use a true minus and say low for a negative bias', () => {
    const reason: HealthReason = {
      code: 'within-allowed',
      health: 'fit',
      figures: { bias: -0.42, low: -1.2, high: 0.4, n: 30, allowed: 10 },
    };
    expect(healthSentence(reason, measure).replaceAll('\u00a0', ' ')).toBe(
      'Reads 0.4 °C low (95 % interval −1.2 to 0.4) over the last 30 samples; allowed error 10 °C.',
    );
  });

  it('say for how long a reference has been missing', () => {
    const reason: HealthReason = {
      code: 'reference-overdue',
      health: 'unproven',
      figures: { ageMs: 46 * 86_400_000, promisedMs: 7 * 86_400_000 },
    };
    expect(healthSentence(reason, measure)).toBe('No reference for 46 days; promised every 7 days.');
  });

  it('head the board with its finding', () => {
    expect(boardHeadline(counts)).toBe('3 of 52 soft sensors can’t be relied on, 1 of them in closed loop.');
    expect(boardSubline(counts)).toBe('2 are unproven, 6 need watching, 41 are fit.');
    expect(boardHeadline({ ...counts, unfit: 0, unproven: 0, watch: 0, fit: 52 })).toBe(
      'All 52 soft sensors are fit.',
    );
    expect(boardHeadline({ ...counts, total: 0 })).toBe('No soft sensor is in service yet.');
  });
});
