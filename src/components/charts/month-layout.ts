/** Soft sensors of one site at the end of one month. */
export interface MonthCount {
  /** "2026-11" */
  month: string;
  unfit: number;
  unproven: number;
}

export interface SiteMonths {
  site: string;
  count: number;
  months: readonly MonthCount[];
}

export interface MonthBlock {
  x: number;
  y: number;
  width: number;
  height: number;
  health: 'unfit' | 'unproven';
  /** How many soft sensors it stands for: one, unless there are too many to draw one by one. */
  count: number;
}

export interface MonthLayout {
  blocks: MonthBlock[];
  letters: { x: number; letter: string }[];
  base: number;
}

const LETTERS = 'JFMAMJJASOND';
export const BLOCKS_WIDTH = 240;
export const BLOCKS_HEIGHT = 66;
const LETTER_ROOM = 18;
const BLOCK_WIDTH = 13;
const BLOCK_HEIGHT = 6;
const SPACE = 2;
const LEAST_STEP = 4;

export function monthLetter(month: string): string {
  return LETTERS[Number(month.slice(5, 7)) - 1] ?? '';
}

/** The tallest month of all sites, so that every site is drawn to one scale. */
export function tallest(sites: readonly SiteMonths[]): number {
  return sites.reduce(
    (top, { months }) => months.reduce((most, { unfit, unproven }) => Math.max(most, unfit + unproven), top),
    1,
  );
}

/**
 * Blocks standing on a line, a month each: unfit below, unproven on top. One block is one soft sensor; where the tallest
 * month of all sites (`top`) leaves less than 4 px a block, a month's blocks of one kind melt into one.
 */
export function layMonths(months: readonly MonthCount[], top: number): MonthLayout {
  const base = BLOCKS_HEIGHT - LETTER_ROOM;
  const step = Math.min(BLOCK_HEIGHT + SPACE, (base - SPACE) / top);
  const slot = BLOCKS_WIDTH / Math.max(1, months.length);
  const blocks: MonthBlock[] = [];
  months.forEach(({ unfit, unproven }, index) => {
    const x = slot * index + (slot - BLOCK_WIDTH) / 2;
    const add = (health: MonthBlock['health'], below: number, count: number) => {
      if (step >= LEAST_STEP || count === 0) {
        for (let k = 0; k < count; k += 1) {
          const y = base - (below + k + 1) * step;
          blocks.push({ x, y, width: BLOCK_WIDTH, height: step - SPACE, health, count: 1 });
        }
      } else {
        const height = Math.max(2, count * step);
        blocks.push({ x, y: base - below * step - height, width: BLOCK_WIDTH, height, health, count });
      }
    };
    add('unfit', 0, unfit);
    add('unproven', unfit, unproven);
  });
  const letters = months.map(({ month }, index) => ({ x: slot * (index + 0.5), letter: monthLetter(month) }));
  return { blocks, letters, base };
}
