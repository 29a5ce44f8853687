import type { Health } from '../contracts/judging.ts';

const order: readonly Health[] = ['fit', 'watch', 'unproven', 'unfit'];

/** How bad a health is: 0 fit, 1 watch, 2 unproven, 3 unfit. */
export const severityOf = (health: Health): number => order.indexOf(health);
