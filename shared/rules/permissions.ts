import type { Action, Role } from '../contracts/access.ts';

type Holder = Role | 'administrator';

/** The only matrix of who may do what. Roles are no ladder: a manager does not enter samples, an engineer does not approve. */
const matrix: Record<Action, readonly Holder[]> = {
  'company.administer': ['administrator'],
  'mail.read': ['administrator'],
  'audit.read': ['administrator', 'manager'],
  'site.view': ['administrator', 'engineer', 'technician', 'manager', 'reader'],
  'site.configure': ['administrator', 'engineer'],
  'history.import': ['engineer'],
  'history.remove': ['engineer'],
  'samples.add': ['engineer', 'technician'],
  'samples.configure': ['administrator', 'engineer', 'technician'],
  'samples.ask': ['engineer', 'manager'],
  // Whether a held result counts: who answers for the estimate or for the laboratory.
  'samples.judge': ['engineer', 'technician'],
  'softSensor.register': ['engineer'],
  'softSensor.edit': ['engineer'],
  'softSensor.replay': ['engineer', 'manager'],
  // A named approver needs a role at the site that may approve; the rule against approving one's own is in `mayDecide`.
  'softSensor.approve': ['manager', 'engineer'],
  'softSensor.suspend': ['engineer', 'technician', 'manager'],
  'softSensor.recalibrate': ['engineer'],
  'softSensor.nameOwner': ['engineer', 'manager'],
  'duty.attend': ['engineer', 'manager'],
  'events.record': ['engineer', 'technician', 'manager'],
};

/** Who asks: roles per site, and whether administrator of the company. */
export interface RoleHolder {
  id: number;
  administrator: boolean;
  roles: readonly { siteId: number; role: Role }[];
}

/** May this person do the action at the site? `null` stands for the company as a whole. */
export function may(holder: RoleHolder, action: Action, siteId: number | null): boolean {
  const holders = matrix[action];
  if (holder.administrator && holders.includes('administrator')) return true;
  return (
    siteId !== null && holder.roles.some((held) => held.siteId === siteId && holders.includes(held.role))
  );
}

/** Sites at which the person may do the action; 'every' for an administrator who may do it company-wide. */
export function sitesWhere(holder: RoleHolder, action: Action): number[] | 'every' {
  if (holder.administrator && matrix[action].includes('administrator')) return 'every';
  const sites = holder.roles.filter((held) => matrix[action].includes(held.role)).map((held) => held.siteId);
  return [...new Set(sites)];
}

/** Does the person belong to the site at all? To anybody else the site does not exist. */
export function knowsSite(holder: RoleHolder, siteId: number): boolean {
  return holder.administrator || holder.roles.some((held) => held.siteId === siteId);
}

/** Why a person may not decide on a proposal. */
export type DecisionRefusal = 'own-proposal' | 'own-edit' | 'not-approver';

/**
 * The second-person rule: the named approver or any manager of the site, never who proposed or edited it.
 * Returns null where the person may decide.
 */
export function mayDecide(
  holder: RoleHolder,
  proposal: { siteId: number; approverId: number | null; proposedBy: number; editedBy: readonly number[] },
): DecisionRefusal | null {
  if (holder.id === proposal.proposedBy) return 'own-proposal';
  if (proposal.editedBy.includes(holder.id)) return 'own-edit';
  const manager = holder.roles.some((held) => held.siteId === proposal.siteId && held.role === 'manager');
  return manager || holder.id === proposal.approverId ? null : 'not-approver';
}
