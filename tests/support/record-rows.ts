import type { Db } from '../../server/db/client.ts';
import { calibrations, duties, events, handovers } from '../../server/db/schema/index.ts';
import { exampleEvidence } from '../../shared/contracts/calibration-evidence.ts';

interface Sensor {
  siteId: number;
  softSensorId: number;
  revisionId: number;
}

const only = async <T>(rows: Promise<T[]>): Promise<T> => (await rows)[0]!;

/** One waiting calibration, event, open duty and open handover of a soft sensor; `mark` stands in each text. */
export async function addRecordRows(db: Db, mark: string, sensor: Sensor, personId: number, at: Date) {
  const { siteId, softSensorId, revisionId } = sensor;
  const key = { siteId, softSensorId };
  const calibration = await only(
    db
      .insert(calibrations)
      .values({
        ...key,
        revisionId,
        number: 1,
        kind: 'bias',
        slope: 1,
        offset: -2,
        slopeBefore: 1,
        offsetBefore: 0,
        evidence: exampleEvidence,
        pairIds: [],
        reason: mark,
        proposedAt: at,
        proposedBy: personId,
        toBeEntered: false,
      })
      .returning({ id: calibrations.id }),
  );
  const event = await only(
    db
      .insert(events)
      .values({ ...key, kind: 'grade-change', at, note: mark, recordedBy: personId, recordedAt: at })
      .returning({ id: events.id }),
  );
  const duty = await only(
    db
      .insert(duties)
      .values({ ...key, kind: 'review', dueOn: '2027-11-01', openedAt: at, openedOn: '2026-11-01' })
      .returning({ id: duties.id }),
  );
  const handover = await only(
    db
      .insert(handovers)
      .values({
        ...key,
        part: 'owner',
        toId: personId,
        proposedAt: at,
        proposedBy: personId,
        reason: mark,
      })
      .returning({ id: handovers.id }),
  );
  return {
    calibrationId: calibration.id,
    eventId: event.id,
    dutyId: duty.id,
    handoverId: handover.id,
  };
}
