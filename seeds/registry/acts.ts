import { eq } from 'drizzle-orm';
import type { CalibrationKind } from '../../shared/contracts/calibration-evidence.ts';
import type { ReviewAnswers, ReviewConclusion } from '../../shared/contracts/duties.ts';
import type { EventKind } from '../../shared/contracts/events.ts';
import type { Context } from '../../server/context.ts';
import { handovers } from '../../server/db/schema/index.ts';
import { confirmAsFound } from '../../server/features/calibrations/confirm.ts';
import { evidenceNow } from '../../server/features/calibrations/evidence.ts';
import { findWaiting } from '../../server/features/calibrations/repo.ts';
import { enterCalibration } from '../../server/features/calibrations/after.ts';
import { decideCalibration, proposeCalibration } from '../../server/features/calibrations/service.ts';
import { addReview } from '../../server/features/duties/reviews.ts';
import { addEvent } from '../../server/features/events/service.ts';
import { judgeNow } from '../../server/features/judging/service.ts';
import { answerHandover, proposeHandover } from '../../server/features/ownership/service.ts';
import { findPersonByEmail } from '../../server/features/people/repo.ts';
import { changePerson } from '../../server/features/people/service.ts';
import { suspend as suspendSensor } from '../../server/features/register/life.ts';
import { currentOwnership } from '../../server/features/register/repo.ts';
import type { Permitted } from '../../server/http/rows.ts';
import { type PersonKey, demoPeople } from '../company.ts';
import { demoUnits } from '../units.ts';
import { type SiteScene, atTime, instantOf, personOf } from './scene.ts';
import { revise, rowOf } from './sensors.ts';

/** Something that somebody did, through the service, at the context's time. */
export type Act = (context: Context, site: SiteScene) => Promise<void>;

const sensorOf = (context: Context, site: SiteScene, tagName: string) =>
  rowOf(context, site, { sheet: { tagName } } as Parameters<typeof rowOf>[2]);

/** Proposes a recalibration on the evidence of that day. */
export const propose =
  (tagName: string, kind: CalibrationKind, by: PersonKey, reason: string): Act =>
  async (context, site) => {
    const sensor = await sensorOf(context, site, tagName);
    const { reply } = await evidenceNow(context.db, sensor, context.clock());
    if (!reply.ok) throw new Error(`${tagName} has no evidence for its story: ${reply.reason}.`);
    const { used, to } = reply.evidence;
    await proposeCalibration(context, await personOf(context, by), sensor, {
      kind,
      reason,
      seen: { used, to },
    });
  };

/** Decides on the recalibration that waits. */
export const decide =
  (tagName: string, decision: 'approved' | 'declined', by: PersonKey, reason = ''): Act =>
  async (context, site) => {
    const { calibration, ownerId } = await waitingOf(context, site, tagName);
    const body = { decision, reason, ownerId, effectiveFrom: null };
    await decideCalibration(context, await personOf(context, by), calibration, body);
  };

/** Approves it, and notes who typed it into the control system half an hour later. */
export const approveAndEnter =
  (tagName: string, by: PersonKey, enteredBy: string, recordedBy: PersonKey): Act =>
  async (context, site) => {
    const { calibration } = await waitingOf(context, site, tagName);
    await decide(tagName, 'approved', by)(context, site);
    const enteredAt = new Date(context.clock().getTime() + 30 * 60_000);
    const later = atTime(context, enteredAt.getTime() + 10 * 60_000);
    await enterCalibration(later, await personOf(context, recordedBy), calibration, {
      enteredBy,
      enteredAt: enteredAt.toISOString(),
    });
  };

async function waitingOf(context: Context, site: SiteScene, tagName: string) {
  const sensor = await sensorOf(context, site, tagName);
  const calibration = (await findWaiting(context.db, sensor.siteId, sensor.id))!;
  const ownership = await currentOwnership(context.db, sensor.siteId, sensor.id);
  return {
    calibration: calibration as Permitted<typeof calibration>,
    ownerId: ownership?.ownerId ?? null,
  };
}

/** Confirms those of these that are Fit with enough references, as an engineer does in bulk on the board. */
export const confirm =
  (tagNames: readonly string[], by: PersonKey): Act =>
  async (context, site) => {
    const keys = tagNames.map((tagName) => site.sensors.get(tagName)!);
    for (const key of keys) await judgeNow(context, key);
    const ids = keys.map(({ softSensorId }) => softSensorId);
    const { refused } = await confirmAsFound(context, await personOf(context, by), [site.row.id], ids);
    const [first] = refused;
    if (first) throw new Error(`${first.tagName} could not be confirmed for its story: ${first.why}`);
  };

/** Records an event of a unit, or of one soft sensor, that happened on a day and hour. */
export const event =
  (
    subject: { unit: string } | { sensor: string },
    kind: EventKind,
    at: { day: number; hour: number },
    by: PersonKey,
    note = '',
  ): Act =>
  async (context, site) => {
    const about =
      'unit' in subject
        ? { unitId: site.units.get(subject.unit)!, softSensorId: null }
        : { unitId: null, softSensorId: site.sensors.get(subject.sensor)!.softSensorId };
    const happened = new Date(instantOf(site, at.day, at.hour)).toISOString();
    const body = { ...about, kind, at: happened, until: null, note };
    await addEvent(context, await personOf(context, by), site.row, body);
    for (const tagName of concerned(subject)) {
      await context.compute.run('estimate', site.sensors.get(tagName)!, context.clock());
    }
  };

const concerned = (subject: { unit: string } | { sensor: string }): string[] =>
  'sensor' in subject
    ? [subject.sensor]
    : demoUnits
        .filter((unit) => unit.name === subject.unit)
        .flatMap((unit) => unit.sensors.map(({ sheet }) => sheet.tagName));

/** Reviews a soft sensor; what was not in order is named. */
export const review =
  (
    tagName: string,
    by: PersonKey,
    conclusion: ReviewConclusion,
    note: string,
    notInOrder: readonly (keyof ReviewAnswers)[] = [],
  ): Act =>
  async (context, site) => {
    const found = (part: keyof ReviewAnswers) => !notInOrder.includes(part);
    const answers = {
      purpose: found('purpose'),
      consumers: found('consumers'),
      inputs: found('inputs'),
      validity: found('validity'),
      owner: found('owner'),
    };
    const sensor = await sensorOf(context, site, tagName);
    await addReview(context, await personOf(context, by), sensor, { conclusion, answers, note });
  };

/** Offers the ownership to a successor, who accepts an hour later or has not answered yet. */
export const handOver =
  (tagName: string, from: PersonKey, to: PersonKey, reason: string, accepted: boolean): Act =>
  async (context, site) => {
    const successor = await personOf(context, to);
    const sensor = await sensorOf(context, site, tagName);
    const offer = { part: 'owner' as const, toId: successor.actor.id, reason };
    const { id } = await proposeHandover(context, await personOf(context, from), sensor, offer);
    if (!accepted) return;
    const later = atTime(context, context.clock().getTime() + 3_600_000);
    const [row] = await context.db.select().from(handovers).where(eq(handovers.id, id));
    await answerHandover(later, successor, row as Permitted<typeof row & object>, {
      answer: 'accepted',
      reason: '',
    });
  };

export const suspend =
  (tagName: string, by: PersonKey, reason: string): Act =>
  async (context, site) => {
    await suspendSensor(context, await personOf(context, by), await sensorOf(context, site, tagName), reason);
  };

/** A person leaves the company: deactivated by the administrator, with what they looked after still theirs. */
export const leave =
  (who: PersonKey): Act =>
  async (context) => {
    const { actor, origin } = await personOf(context, 'administrator');
    const person = (await findPersonByEmail(context.db, demoPeople[who].email))!;
    const { actor: held } = await personOf(context, who);
    const { name, email, administrator, version } = person;
    const body = { name, email, administrator, version, deactivated: true, roles: [...held.roles] };
    await changePerson(context, actor, person.id, body, origin);
  };

/** A new revision of the same model with another step, fitted anew. */
export const reviseStep =
  (tagName: string, day: number, stepMs: number, reason: string): Act =>
  async (context, site) => {
    const demo = demoUnits
      .flatMap((unit) => unit.sensors)
      .find((sensor) => sensor.sheet.tagName === tagName)!;
    await revise(context, site, demo, { day, stepMs, reason });
  };
