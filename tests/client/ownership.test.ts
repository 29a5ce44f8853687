import { describe, expect, test } from 'vitest';
import type { Responsibility } from '../../shared/contracts/ownership.ts';
import {
  answersForWords,
  handoverListWords,
  missingParts,
} from '../../src/components/ownership/ownership-words.ts';

const answersFor = (part: Responsibility['part'], own: Partial<Responsibility> = {}): Responsibility => ({
  softSensorId: 1,
  siteId: 1,
  siteName: 'Tarnby Works',
  tagName: 'TY-1402',
  name: 'Crown interior temperature',
  importanceClass: 'A',
  life: 'in-service',
  part,
  opensGap: part !== 'approver',
  ...own,
});

describe('what a person answers for', () => {
  test('is counted by part before they are deactivated', () => {
    const rows = [
      ...Array.from({ length: 4 }, () => answersFor('owner')),
      answersFor('deputy'),
      answersFor('deputy'),
    ];
    expect(answersForWords(rows)).toBe('Owner of 4 soft sensors and deputy of 2.');
    expect(answersForWords([...rows, answersFor('approver')])).toBe(
      'Owner of 4 soft sensors, deputy of 2 and approver of 1.',
    );
    expect(answersForWords([answersFor('deputy')])).toBe('Deputy of 1 soft sensor.');
    expect(answersForWords([])).toBe('Answers for no soft sensor.');
  });

  test('becomes a handover list for the managers of each site where it leaves a gap', () => {
    expect(handoverListWords([answersFor('owner'), answersFor('deputy')])).toBe(
      'Deactivating opens a handover list for the plant managers of Tarnby Works.',
    );
    const elsewhere = answersFor('owner', { siteName: 'Ostrander Mill' });
    expect(handoverListWords([answersFor('owner'), elsewhere])).toContain(
      'of Tarnby Works and Ostrander Mill.',
    );
    expect(handoverListWords([answersFor('approver')])).toBeNull();
  });
});

describe('the parts to be filled', () => {
  test('come once each, the owner first', () => {
    expect(missingParts(['deputy-deactivated', 'owner-no-engineer'])).toEqual(['owner', 'deputy']);
    expect(missingParts(['no-deputy'])).toEqual(['deputy']);
    expect(missingParts([])).toEqual([]);
  });
});
