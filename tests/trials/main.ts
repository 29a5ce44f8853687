import { trials as filterTrials } from './filter-figures.ts';
import { killedCommitTrials } from './killed-commits.ts';
import { trials as statisticsTrials } from './numerics-figures.ts';
import { sampleFileTrials } from './mutated-samples.ts';
import { reminderTrials } from './reminders.ts';

/** Every figure that was simulated for this project, simulated again: `npm run trials`, or with a seed of one's own. */
const trials = [
  ...statisticsTrials,
  ...filterTrials,
  ...killedCommitTrials,
  ...reminderTrials,
  ...sampleFileTrials,
];
const seed = Number(process.argv[2] ?? 20_261_201);
console.log(`seed ${seed}`);
let failed = 0;
for (const trial of trials) {
  const started = performance.now();
  const { figures, agrees } = await trial.run(seed);
  const words = Object.entries(figures).map(([name, value]) => `${name} ${Number(value.toPrecision(4))}`);
  const seconds = ((performance.now() - started) / 1000).toFixed(1);
  console.log(`${agrees ? 'agrees' : 'DIFFERS'}  ${trial.name}: ${words.join(', ')} (${seconds} s)`);
  if (!agrees) failed++;
}
console.log(`${trials.length - failed} agree, ${failed} differ`);
process.exit(failed > 0 ? 1 : 0);
