import { readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { sites } from '../../server/db/schema/index.ts';
import { get, hour, post } from '../support/plant.ts';
import { plantData, withoutData } from '../support/plant-data.ts';
import { useServer } from '../support/server.ts';
import { sheetFields } from '../support/sheet-fields.ts';

// Open data: gas turbine emissions (UCI Machine Learning Repository 551, CC BY 4.0). baseline.json was computed
// independently; its recipes `ols` and `ols_bias_ewma_0.3` are checked here to 5 digits.
const folder = plantData('gas_turbine_nox');
const inputs = ['AT', 'AP', 'AH', 'AFDP', 'GTEP', 'TIT', 'TAT', 'TEY', 'CDP'];
const split = '2014-01-01T00:00:00.000Z';
const end = '2016-01-01T00:00:00.000Z';

const server = useServer();

describe.skipIf(withoutData('gas_turbine_nox'))(
  'gas turbine emissions (skipped where ../shared/data is absent)',
  () => {
    it('go from two CSV files to the errors that others computed', async () => {
      const baseline = JSON.parse(readFileSync(path.join(folder, 'baseline.json'), 'utf8'));
      const [site] = await server.context.db
        .insert(sites)
        .values({ name: 'Turbine hall', zone: 'Europe/Istanbul' })
        .returning();
      const siteId = site!.id;
      const engineer = await server.signedIn({ roles: [{ siteId, role: 'engineer' }] });
      const technician = await server.signedIn({ roles: [{ siteId, role: 'technician' }] });
      const manager = await server.signedIn({ roles: [{ siteId, role: 'manager' }] });

      const area = await post(engineer, `/sites/${siteId}/areas`, { name: 'Power' });
      const unit = await post(engineer, `/sites/${siteId}/units`, { name: 'Gas turbine 1', areaId: area.id });
      const tags = await post(engineer, `/sites/${siteId}/tags`, {
        tags: inputs.map((name) => ({ name, unit: '', unitId: unit.id, rangeLow: null, rangeHigh: null })),
      });
      const point = await post(engineer, `/sites/${siteId}/sample-points`, {
        name: 'Stack',
        unitId: unit.id,
      });

      const history = await engineer
        .post(`/api/v1/sites/${siteId}/history-imports`)
        .attach('file', path.join(folder, 'history.csv'))
        .expect(200);
      expect(history.body.preview).toMatchObject({ unknownTags: [], sameAs: null });
      await post(engineer, `/history-imports/${history.body.import.id}/start`, {
        layout: history.body.preview.proposed,
        replaceExisting: false,
      });
      await server.drainJobs();
      const imported = await get(engineer, `/history-imports/${history.body.import.id}`);
      expect(imported.import).toMatchObject({ state: 'done', added: 36_733 * 9, refused: 0 });

      const uploaded = await technician
        .post(`/api/v1/sites/${siteId}/sample-imports`)
        .attach('file', path.join(folder, 'lab.csv'))
        .expect(200);
      const dryRun = await technician
        .put(`/api/v1/sample-imports/${uploaded.body.import.id}/mapping`)
        .send({
          mapping: { ...uploaded.body.preview.proposed, samplePointId: point.id, unit: 'mg/m³' },
          version: uploaded.body.import.version,
        })
        .expect(200);
      expect(dryRun.body.import.counts).toMatchObject({ rows: 1531, added: 1531, refused: 0 });
      await post(technician, `/sample-imports/${uploaded.body.import.id}/commit`, {
        version: dryRun.body.import.version,
        outcome: dryRun.body.outcome,
      });

      const fields = sheetFields({
        unitId: unit.id,
        samplePointId: point.id,
        tagName: 'AY-NOX',
        unit: 'mg/m³',
        allowedErrorAbsolute: 5,
      });
      const sheet = await post(engineer, `/sites/${siteId}/soft-sensors`, fields);
      const model = {
        form: 'regression',
        stepMs: hour,
        holdLimitMs: hour,
        intercept: 0,
        terms: tags.rows
          .toSorted(
            (a: { name: string }, b: { name: string }) => inputs.indexOf(a.name) - inputs.indexOf(b.name),
          )
          .map((tag: { id: number }) => ({ tagId: tag.id, coefficient: 0 })),
        residualSd: null,
      };
      const draft = await engineer
        .put(`/api/v1/soft-sensors/${sheet.id}/draft`)
        .send({ model, version: null })
        .expect(200);
      const fit = await post(engineer, `/soft-sensors/${sheet.id}/draft/fit`, {
        from: '2011-01-01T00:00:00.000Z',
        to: split,
        version: draft.body.version,
      });
      await server.drainJobs();
      expect(await get(engineer, `/runs/${fit.id}`)).toMatchObject({ state: 'done', problem: null });
      const fitted = (await get(engineer, `/soft-sensors/${sheet.id}`)).draft;
      expect(fitted.fit).toMatchObject({ samples: baseline.recipes.ols.n_train });
      for (const term of fitted.fit.terms) {
        const published = baseline.recipes.ols.coef[term.tagName];
        expect(Math.abs(term.coefficient / published - 1), term.tagName).toBeLessThan(1e-6);
      }

      const replay = await post(engineer, `/soft-sensors/${sheet.id}/replays`, {
        from: '2011-01-01T00:00:00.000Z',
        to: end,
        judgedFrom: split,
        updateFactor: 0.3,
        model: 'draft',
      });
      await server.drainJobs();
      const { judgement } = (await get(engineer, `/replays/${replay.id}`)).figures;
      expectPublished(judgement, baseline);
      expect(judgement.holdLast.rmse).toBeGreaterThan(judgement.exponential.rmse);

      const revision = await post(engineer, `/soft-sensors/${sheet.id}/revisions`, {
        version: fitted.version,
        reason: 'Fitted on three years of samples',
        changeReference: '',
      });
      await post(manager, `/revisions/${revision.id}/decision`, { decision: 'approved', reason: '' });
      await server.drainJobs();
      const recorded = await get(engineer, `/soft-sensors/${sheet.id}/performance`, {
        from: split,
        to: end,
        updateFactor: 0.3,
      });
      expectPublished(recorded.judgement, baseline);
    }, 180_000);
  },
);

interface Scored {
  bias: { n: number; rmse: number; bias: number };
  exponential: { n: number; rmse: number; bias: number };
}

function expectPublished(
  judgement: Scored,
  baseline: { recipes: Record<string, { at_lab_test: { n: number; rmse: number; bias: number } }> },
) {
  const ols = baseline.recipes.ols!.at_lab_test;
  const updated = baseline.recipes['ols_bias_ewma_0.3']!.at_lab_test;
  expect(judgement.bias.n).toBe(606);
  expect(judgement.bias.rmse.toPrecision(5)).toBe(ols.rmse.toPrecision(5));
  expect(judgement.bias.bias.toPrecision(5)).toBe(ols.bias.toPrecision(5));
  expect(judgement.exponential.rmse.toPrecision(5)).toBe(updated.rmse.toPrecision(5));
  expect(judgement.bias.rmse).toBeCloseTo(8.4674, 4);
  expect(judgement.bias.bias).toBeCloseTo(0.9401, 4);
  expect(judgement.exponential.rmse).toBeCloseTo(6.9716, 4);
}
