import { afterEach, describe, expect, test } from 'vitest';
import MonthBlocks from '../../src/components/charts/MonthBlocks.vue';
import { layMonths, monthLetter, tallest } from '../../src/components/charts/month-layout.ts';
import { mountPart } from './mount-part.ts';

afterEach(() => (document.body.innerHTML = ''));

const months = [
  { month: '2026-10', unfit: 1, unproven: 1 },
  { month: '2026-11', unfit: 2, unproven: 0 },
];

describe('months of unfit and unproven soft sensors', () => {
  test('stand on the line, a block for each soft sensor, unproven on top of unfit', () => {
    const { blocks, base } = layMonths(months, 2);
    expect(blocks.map(({ health }) => health)).toEqual(['unfit', 'unproven', 'unfit', 'unfit']);
    expect(blocks[1]!.y + blocks[1]!.height).toBeLessThan(blocks[0]!.y);
    expect(blocks.every(({ y, height }) => y >= 0 && y + height <= base)).toBe(true);
    expect(blocks[0]!.x).toBe(blocks[1]!.x);
    expect(blocks[2]!.x).toBeGreaterThan(blocks[1]!.x);
  });

  test('are drawn to one scale at every site', () => {
    const quiet = { site: 'A', count: 4, months: [{ month: '2026-11', unfit: 1, unproven: 0 }] };
    const busy = { site: 'B', count: 60, months: [{ month: '2026-11', unfit: 20, unproven: 20 }] };
    const top = tallest([quiet, busy]);
    expect(top).toBe(40);
    const [one] = layMonths(quiet.months, top).blocks;
    const twenty = layMonths(busy.months, top).blocks;
    expect(twenty).toHaveLength(2);
    expect(twenty.map(({ count }) => count)).toEqual([20, 20]);
    expect(twenty[0]!.height / one!.height).toBeLessThanOrEqual(20);
    expect(twenty.every(({ y }) => y >= 0)).toBe(true);
  });

  test('carry the letter of their month', () => {
    expect(['2026-01', '2026-09', '2026-12'].map(monthLetter)).toEqual(['J', 'S', 'D']);
  });

  test('are said in words and held by a table', async () => {
    const part = mountPart(MonthBlocks, { props: { sites: [{ site: 'Tarnby Works', count: 19, months }] } });
    expect(part.get('.site [role=img]').attributes('aria-label')).toBe(
      'Tarnby Works, 19 soft sensors. 2026-10: 1 unfit, 1 unproven. 2026-11: 2 unfit, 0 unproven.',
    );
    const button = part.findAll('button').find((candidate) => candidate.text() === 'Table')!;
    await button.trigger('click');
    expect(part.findAll('tbody tr').map((row) => row.findAll('td').map((cell) => cell.text()))).toEqual([
      ['Tarnby Works', '2026-10', '1', '1'],
      ['Tarnby Works', '2026-11', '2', '0'],
    ]);
  });
});
