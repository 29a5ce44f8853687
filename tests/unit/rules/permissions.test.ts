import { describe, expect, it } from 'vitest';
import { type Action, actions, type Role, roles } from '../../../shared/contracts/access.ts';
import { knowsSite, may, mayDecide, type RoleHolder, sitesWhere } from '../../../shared/rules/permissions.ts';

const holder = (own: Partial<RoleHolder> = {}): RoleHolder => ({
  id: 1,
  administrator: false,
  roles: [],
  ...own,
});
const at = (siteId: number, ...held: Role[]) => held.map((role) => ({ siteId, role }));
const administrator = holder({ administrator: true });

// Who may do what is decided in the project's own design; the table is written out here a second time on purpose.
const wanted: Record<Action, string> = {
  'company.administer': 'administrator',
  'mail.read': 'administrator',
  'audit.read': 'administrator manager',
  'site.view': 'administrator engineer technician manager reader',
  'site.configure': 'administrator engineer',
  'history.import': 'engineer',
  'history.remove': 'engineer',
  'samples.add': 'engineer technician',
  'samples.configure': 'administrator engineer technician',
  'samples.ask': 'engineer manager',
  'samples.judge': 'engineer technician',
  'softSensor.register': 'engineer',
  'softSensor.edit': 'engineer',
  'softSensor.replay': 'engineer manager',
  'softSensor.approve': 'engineer manager',
  'softSensor.suspend': 'engineer technician manager',
  'softSensor.recalibrate': 'engineer',
  'softSensor.nameOwner': 'engineer manager',
  'duty.attend': 'engineer manager',
  'events.record': 'engineer manager technician',
};

describe('who may do what', () => {
  it.each(actions)('%s', (action) => {
    const allowed = [
      ...(may(administrator, action, 7) ? ['administrator'] : []),
      ...roles.filter((role) => may(holder({ roles: at(7, role) }), action, 7)),
    ];
    expect(allowed.sort()).toEqual(wanted[action].split(' ').sort());
  });

  it('is nothing for a person without a role', () => {
    for (const action of actions) expect(may(holder(), action, 7) || may(holder(), action, null)).toBe(false);
  });

  it('ends at the fence: no role counts at another site or for the company', () => {
    const everything = holder({ roles: at(7, ...roles) });
    for (const action of actions) {
      expect(may(everything, action, 8)).toBe(false);
      expect(may(everything, action, null)).toBe(false);
    }
  });

  it('adds up where a person holds several roles', () => {
    const both = holder({ roles: [...at(7, 'technician', 'manager'), ...at(8, 'reader')] });
    expect(may(both, 'samples.add', 7) && may(both, 'audit.read', 7)).toBe(true);
    expect(may(both, 'samples.add', 8) || may(both, 'audit.read', 8)).toBe(false);
  });

  it('gives an administrator no right to judge or to change what is measured', () => {
    for (const action of [
      'softSensor.approve',
      'softSensor.edit',
      'samples.add',
      'history.remove',
    ] as const) {
      expect(may(administrator, action, 7)).toBe(false);
    }
    const alsoEngineer = holder({ administrator: true, roles: at(7, 'engineer') });
    expect(may(alsoEngineer, 'softSensor.edit', 7)).toBe(true);
    expect(may(alsoEngineer, 'softSensor.edit', 8)).toBe(false);
  });
});

describe('sites', () => {
  it('are those where a role allows it, each once', () => {
    const person = holder({ roles: [...at(7, 'manager', 'engineer'), ...at(8, 'reader')] });
    expect(sitesWhere(person, 'softSensor.approve')).toEqual([7]);
    expect(sitesWhere(person, 'site.view')).toEqual([7, 8]);
    expect(sitesWhere(person, 'company.administer')).toEqual([]);
  });

  it('are every site for an administrator, but only for what administrators may', () => {
    expect(sitesWhere(administrator, 'audit.read')).toBe('every');
    expect(sitesWhere(administrator, 'samples.add')).toEqual([]);
  });

  it('are known to whoever holds any role there, and to administrators', () => {
    expect(knowsSite(holder({ roles: at(7, 'reader') }), 7)).toBe(true);
    expect(knowsSite(holder({ roles: at(7, 'reader') }), 8)).toBe(false);
    expect(knowsSite(administrator, 8)).toBe(true);
    expect(knowsSite(holder(), 7)).toBe(false);
  });
});

describe('deciding on a proposal', () => {
  const proposal = { siteId: 7, approverId: 5, proposedBy: 2, editedBy: [3] };

  it.each([
    ['the proposer, even as manager', { id: 2, roles: at(7, 'manager') }, 'own-proposal'],
    ['an editor of the draft, even as manager', { id: 3, roles: at(7, 'manager') }, 'own-edit'],
    ['a manager of the site', { id: 4, roles: at(7, 'manager') }, null],
    ['the named approver', { id: 5, roles: at(7, 'engineer') }, null],
    ['another engineer of the site', { id: 6, roles: at(7, 'engineer') }, 'not-approver'],
    ['a manager of another site', { id: 6, roles: at(8, 'manager') }, 'not-approver'],
    ['an administrator of the company', { id: 6, administrator: true }, 'not-approver'],
  ] as const)('by %s', (_who, person, refusal) => {
    expect(mayDecide(holder(person), proposal)).toBe(refusal);
  });

  it('is refused to a named approver who proposed or edited it', () => {
    const named = holder({ id: 5, roles: at(7, 'engineer') });
    expect(mayDecide(named, { ...proposal, proposedBy: 5 })).toBe('own-proposal');
    expect(mayDecide(named, { ...proposal, editedBy: [3, 5] })).toBe('own-edit');
  });

  it('needs a manager where nobody is named', () => {
    const unnamed = { ...proposal, approverId: null };
    expect(mayDecide(holder({ id: 5, roles: at(7, 'engineer') }), unnamed)).toBe('not-approver');
    expect(mayDecide(holder({ id: 4, roles: at(7, 'manager') }), unnamed)).toBeNull();
  });
});
