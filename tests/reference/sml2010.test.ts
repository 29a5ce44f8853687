import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { filterSeries } from '../../shared/numerics/filter-run.ts';
import { filterWithLateSamples } from '../../shared/numerics/late-samples.ts';
import { answered } from './expectations.ts';

const folder = fileURLToPath(new URL('../../../shared/data/sml2010/', import.meta.url));
const here = existsSync(`${folder}baseline.json`);

function table(name: string): Record<string, string>[] {
  const [head, ...lines] = readFileSync(folder + name, 'utf8')
    .trim()
    .split('\n');
  const names = head!.split(',');
  return lines.map((line) => Object.fromEntries(line.split(',').map((value, i) => [names[i]!, value])));
}

// Data: UCI SML2010 (CC BY 4.0), bedroom temperature as the unmeasured quantity. Source of the numbers: a filter written in
// numpy with the same matrices, row by row.
describe('house temperatures, bedroom estimated from the dining room', () => {
  if (!here) {
    it.skip('needs the house data (sml2010) beside the project, which is not there', () => undefined);
    return;
  }
  const { kalman, kalman_plus_lab } = JSON.parse(readFileSync(`${folder}baseline.json`, 'utf8')).recipes;
  const baseline = table('baseline_observer.csv');
  const history = table('history.csv').filter((row) => row.timestamp! >= baseline[0]!.timestamp!);
  const inputs: string[] = [
    'Temperature_Exterior_Sensor',
    'Meteo_Exterior_Piranometro',
    'Meteo_Exterior_Sol_Sud',
    'Meteo_Exterior_Sol_Oest',
    'Meteo_Exterior_Sol_Est',
  ];
  // The constant of the model enters as the gain of an input that is always one.
  const model = {
    A: kalman.A as number[][],
    B: (kalman.B as number[][]).map((row, i) => [...row, kalman.c[i] as number]),
    C: [[0, 1]],
    H: [[1, 0]],
  };
  const series = {
    u: Float64Array.from(history.flatMap((row) => [...inputs.map((name) => Number(row[name])), 1])),
    y: Float64Array.from(history.map((row) => Number(row.Temperature_Comedor_Sensor))),
  };
  const start = { x0: kalman.x0 as number[], P0: kalman.P0 as number[][] };

  function expectColumn(actual: Float64Array, column: string): void {
    expect(actual.length).toBe(baseline.length);
    let worst = 0;
    baseline.forEach((row, k) => (worst = Math.max(worst, Math.abs(actual[k]! - Number(row[column])))));
    expect(worst).toBeLessThan(1e-6);
  }

  it('filter without laboratory samples, every row', () => {
    const run = answered(filterSeries(model, kalman, start, series));
    expectColumn(run.z, 'kalman');
    expectColumn(run.sd, 'kalman_sd');
  });

  it('filter with laboratory samples, every row', () => {
    const at = new Map(history.map((row, k) => [row.timestamp!, k]));
    const samples = table('lab.csv').flatMap(({ sample_time, value }) => {
      const step = at.get(sample_time!);
      const variance = kalman_plus_lab.R_lab as number;
      return step === undefined ? [] : [{ takenAt: step, reportedAt: step, value: Number(value), variance }];
    });
    expect(samples).toHaveLength(62);
    const run = answered(filterWithLateSamples(model, kalman, start, series, samples));
    expectColumn(run.z, 'kalman_plus_lab');
    expectColumn(run.sd, 'kalman_plus_lab_sd');
  });
});
