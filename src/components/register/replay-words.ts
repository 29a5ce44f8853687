import type { Replay } from '../../../shared/contracts/judging.ts';

/** Which model a replay ran: "draft", "revision 4". */
export function modelOfReplay(replay: Pick<Replay, 'draft' | 'revisionNumber'>): string {
  return replay.draft || replay.revisionNumber === null ? 'draft' : `revision ${replay.revisionNumber}`;
}
