import type { DutyKind } from '../contracts/duties.ts';
import type { RoleHolder } from './permissions.ts';

/** What decides on who may do what with a duty. */
export interface DutyRightsFacts {
  kind: DutyKind;
  siteId: number;
  open: boolean;
  ownerId: number | null;
  deputyId: number | null;
  approverId: number | null;
  assigneeId: number | null;
}

export type WaiverRefusal = 'own-duty' | 'not-approver';

const holds = (holder: RoleHolder, siteId: number, role: string): boolean =>
  holder.roles.some((held) => held.siteId === siteId && held.role === role);

/**
 * Why a person may not waive a duty; null where they may. A manager of the site or the named approver waives, never
 * whose duty it is; an ownership gap only a manager.
 */
export function waiverRefusal(holder: RoleHolder, duty: DutyRightsFacts): WaiverRefusal | null {
  const manager = holds(holder, duty.siteId, 'manager');
  if (duty.kind === 'ownership-gap') return manager ? null : 'not-approver';
  if (holder.id === duty.ownerId || holder.id === duty.assigneeId) return 'own-duty';
  return manager || holder.id === duty.approverId ? null : 'not-approver';
}

/** What a person may do with a duty. A recalibration is made by an engineer; a gap is nobody's to give away. */
export function dutyRights(
  holder: RoleHolder,
  duty: DutyRightsFacts,
): { mayAttend: boolean; mayWaive: boolean; mayReassign: boolean } {
  const engineer = holds(holder, duty.siteId, 'engineer');
  const manager = holds(holder, duty.siteId, 'manager');
  const own = holder.id === duty.ownerId || holder.id === duty.deputyId;
  return {
    mayAttend: duty.open && (engineer || (manager && duty.kind !== 'recalibration')),
    mayWaive: duty.open && (engineer || manager) && waiverRefusal(holder, duty) === null,
    mayReassign: duty.open && duty.kind !== 'ownership-gap' && (manager || (own && engineer)),
  };
}
