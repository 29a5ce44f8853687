import { writeFileSync } from 'node:fs';
import type { SerializedError } from 'vitest';
import type { Reporter, TestModule } from 'vitest/node';

interface Counts {
  passed: number;
  failed: number;
  skipped: number;
}

function countModule(module: TestModule, counts: Counts): void {
  for (const test of module.children.allTests()) {
    const { state } = test.result();
    if (state === 'passed') counts.passed++;
    else if (state === 'failed') counts.failed++;
    else counts.skipped++;
  }
  // A file that does not load and a failing hook around a group of tests belong to no test.
  const groups = [module, ...module.children.allSuites()];
  counts.failed += groups.filter((group) => group.errors().length > 0).length;
}

/**
 * Says in one plain line how many tests passed and failed. Where CUPEL_TEST_COUNTS names a file the figures go there
 * instead, for the program that started the run to print them at its own end.
 */
export default class PlainReporter implements Reporter {
  onTestRunEnd(modules: readonly TestModule[], unhandledErrors: readonly SerializedError[]): void {
    const counts: Counts = { passed: 0, failed: unhandledErrors.length, skipped: 0 };
    for (const module of modules) countModule(module, counts);
    const file = process.env.CUPEL_TEST_COUNTS;
    if (file) {
      writeFileSync(file, JSON.stringify(counts));
      return;
    }
    const skipped = counts.skipped > 0 ? `, ${counts.skipped} skipped` : '';
    process.stdout.write(`${counts.passed} passed, ${counts.failed} failed${skipped}\n`);
  }
}
