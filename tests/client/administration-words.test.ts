import { describe, expect, it } from 'vitest';
import type { AuditEntry } from '../../shared/contracts/audit.ts';
import type { MailRow } from '../../shared/contracts/mail.ts';
import { valueWords } from '../../src/components/administration/audit-value.ts';
import { deedWords, fieldChanges } from '../../src/components/administration/audit-words.ts';
import { mailHeadline, mailSubline, stateWords } from '../../src/components/administration/mail-words.ts';
import { peopleHeadline, rolesInWords } from '../../src/components/administration/role-words.ts';
import RolesGrid from '../../src/components/administration/RolesGrid.vue';
import { zoneNow } from '../../src/components/administration/zone-words.ts';
import { mountPart } from './mount-part.ts';

const site = (id: number, name: string, archivedAt: string | null = null) => ({
  id,
  name,
  zone: 'UTC',
  archivedAt,
  version: 1,
});
const sites = [
  site(1, 'Tarnby Works'),
  site(2, 'Ostrander Mill'),
  site(3, 'Old Works', '2026-01-01T00:00:00Z'),
];

describe('roles in words', () => {
  it.each([
    [false, [], 'No role yet'],
    [true, [], 'Administrator of the company'],
    [false, [[1, 'engineer']], 'Process engineer at Tarnby Works'],
    [
      false,
      [
        [1, 'engineer'],
        [2, 'engineer'],
        [2, 'manager'],
      ],
      'Process engineer at every site; plant manager at Ostrander Mill',
    ],
    [true, [[2, 'reader']], 'Administrator of the company; reader at Ostrander Mill'],
  ] as const)('%s %j: %s', (administrator, held, words) => {
    const roles = held.map(([siteId, role]) => ({ siteId, role }));
    expect(rolesInWords({ administrator, roles }, sites)).toBe(words);
  });

  it('are set in a grid of sites and roles, each box named in words', async () => {
    const roles = [{ siteId: 2, role: 'manager' }];
    const grid = mountPart(RolesGrid, { props: { sites: sites.slice(0, 2), modelValue: roles } });
    const box = (name: string) => grid.get(`[role="checkbox"][aria-label="${name}"]`);
    expect(box('plant manager at Ostrander Mill').attributes('aria-checked')).toBe('true');
    expect(box('plant manager at Tarnby Works').attributes('aria-checked')).toBe('false');
    await box('process engineer at Tarnby Works').trigger('click');
    expect(grid.emitted('update:modelValue')!.at(-1)).toEqual([
      [
        { siteId: 1, role: 'engineer' },
        { siteId: 2, role: 'manager' },
      ],
    ]);
    await box('plant manager at Ostrander Mill').trigger('click');
    expect(grid.emitted('update:modelValue')!.at(-1)![0]).not.toContainEqual(roles[0]);
    grid.unmount();
  });
});

it('the finding of the people counts those who can’t sign in yet, and leaves out who has gone', () => {
  const person = (hasPassword: boolean, deactivatedAt: string | null = null) => ({
    hasPassword,
    deactivatedAt,
  });
  expect(peopleHeadline([person(true)])).toBe('1 person, all with a password.');
  const people = [person(true), person(false), person(false), person(false, '2026-01-01T00:00:00Z')];
  expect(peopleHeadline(people)).toBe('3 people, 2 without a password yet.');
});

const entry = (own: Partial<AuditEntry>): AuditEntry => ({
  id: 1,
  at: '2026-12-01T07:00:00.000Z',
  siteId: 1,
  siteName: 'Tarnby Works',
  personName: 'Ada Minster',
  fromAddress: '',
  action: 'change',
  entity: 'area',
  entityId: '1',
  entityName: 'Hot end',
  before: null,
  after: null,
  reason: '',
  requestId: '',
  ...own,
});

describe('an entry of the audit trail', () => {
  const gone = { archivedAt: '2026-12-01T07:00:00.000Z' };
  it.each([
    [{ action: 'add' }, 'added the area Hot end'],
    [{ before: { name: 'a' }, after: { name: 'b' } }, 'changed the area Hot end'],
    [{ before: { archivedAt: null }, after: gone }, 'archived the area Hot end'],
    [{ before: gone, after: { archivedAt: null } }, 'took back the area Hot end'],
    [{ before: gone, after: gone }, 'changed the area Hot end'],
    [{ action: 'sign-in', entity: 'person', entityName: 'Ada Minster' }, 'signed in'],
    [
      { action: 'ask-for-link', entity: 'person', entityName: 'Tove Halbrook' },
      'asked for a password link for Tove Halbrook',
    ],
    [
      { action: 'start', entity: 'password link', entityName: 'Tove Halbrook' },
      'mailed a password link to Tove Halbrook',
    ],
    [{ action: 'remove', entity: 'readings', entityName: 'TI-1401' }, 'removed readings of TI-1401'],
    [
      { action: 'propose', entity: 'softSensor', entityName: 'AY-3310, revision' },
      'proposed the revision of AY-3310',
    ],
    [
      { action: 'commit', entity: 'sample-import', entityName: 'wk48.csv' },
      'committed the sample file wk48.csv',
    ],
    [{ action: 'remove', entity: 'sample', entityName: 'KX-1' }, 'withdrew the sample KX-1'],
    [{ action: 'decide', entity: 'sample', entityName: 'KX-1' }, 'released the sample KX-1'],
    [{ action: 'add', entity: 're-test', entityName: 'KX-1' }, 'asked for the re-test of KX-1'],
    [
      { action: 'remove', entity: 'check-result', entityName: 'Gold point' },
      'withdrew the results on Gold point',
    ],
    [{ action: 'weigh', entity: 'new-thing', entityName: 'X' }, 'weigh the new thing X'],
  ])('%j: %s', (own, words) => {
    expect(deedWords(entry(own))).toBe(words);
  });

  it('names each field before and after, what changed first, without row numbers', () => {
    const rows = fieldChanges({
      before: { id: 1, version: 1, name: 'Hot end', holdLimitMs: 1, rangeLow: null },
      after: { id: 1, version: 2, name: 'Hot end', holdLimitMs: 1, rangeLow: 5 },
    });
    expect(rows.map(({ label, changed }) => [label, changed])).toEqual([
      ['Range low', true],
      ['Name', false],
      ['Hold limit', false],
    ]);
  });

  it('leaves out blanks where there is only one side', () => {
    const rows = fieldChanges({ before: null, after: { name: 'Hot end', archivedAt: null, note: '' } });
    expect(rows.map(({ label }) => label)).toEqual(['Name']);
  });
});

describe('a value of an entry', () => {
  const around = { zone: 'UTC', sites };
  it.each([
    ['name', null, '–'],
    ['administrator', true, 'yes'],
    ['intercept', -96, '−96'],
    ['residualSd', 0.072111025509, '0.072111'],
    ['stepMs', 3_600_000, '1 h'],
    ['archivedAt', '2026-12-01T07:00:00.000Z', '1 Dec 2026 07:00'],
    ['editedBy', [3, 5], '3, 5'],
    ['roles', [], '–'],
    ['roles', [{ siteId: 1, role: 'reader' }], 'Reader at Tarnby Works'],
    [
      'terms',
      [
        { tagId: 16, coefficient: 1.32 },
        { tagId: 17, coefficient: -0.12 },
      ],
      'tag number 16, coefficient 1.32\ntag number 17, coefficient −0.12',
    ],
    ['mapping', { delimiter: ';', headerLine: 1 }, 'delimiter ;\nheader line 1'],
  ])('%s %j: %s', (field, value, words) => {
    expect(valueWords(field, value, around)).toBe(words);
  });
});

describe('mail', () => {
  const mail = (own: Partial<MailRow>) => ({ state: 'sent', attempts: 1, ...own }) as MailRow;

  it('says where it goes and what has not gone', () => {
    expect(mailHeadline('local')).toBe('Mail stays here: no mail server is set.');
    expect(mailHeadline('mail.tarnby.example:465')).toBe('Mail goes out through mail.tarnby.example:465.');
    expect(mailSubline([mail({})])).toBe('');
    const rows = [mail({ state: 'failed' }), mail({ state: 'waiting' }), mail({})];
    expect(mailSubline(rows)).toBe('Of those shown, 1 could not be sent and 1 waits.');
  });

  it('tells its state', () => {
    expect(stateWords(mail({ sentAt: '2026-12-01T07:00:00.000Z' }), 'UTC')).toBe('sent 1 Dec 2026 07:00');
    expect(stateWords(mail({ state: 'failed', attempts: 3 }), 'UTC')).toBe('failed after 3 attempts');
    expect(stateWords(mail({ state: 'failed', attempts: 0 }), 'UTC')).toBe('not sent');
    expect(stateWords(mail({ state: 'waiting' }), 'UTC')).toBe('waiting');
  });
});

it('a zone is told with its clock', () => {
  const now = new Date('2026-12-01T13:05:00Z');
  expect(zoneNow('Europe/Copenhagen', now)).toBe('Europe/Copenhagen, now 14:05 (UTC+1)');
  expect(zoneNow('America/Argentina/Buenos_Aires', now)).toBe(
    'America/Argentina/Buenos Aires, now 10:05 (UTC−3)',
  );
});
