import type { Role } from '../shared/contracts/access.ts';

/** The demo company. Everybody and everything in it is invented. */
export const demoPassword = 'bone ash and silver';

export const demoSites = [
  { name: 'Tarnby Works', zone: 'Europe/Copenhagen' },
  { name: 'Ostrander Mill', zone: 'America/Chicago' },
  { name: 'Kallara Refinery', zone: 'Australia/Adelaide' },
] as const;
export type DemoSite = (typeof demoSites)[number]['name'];

interface DemoPerson {
  name: string;
  email: string;
  says: string;
  administrator?: boolean;
  roles: Partial<Record<DemoSite, Role[]>>;
}

const everySite = (role: Role): DemoPerson['roles'] =>
  Object.fromEntries(demoSites.map(({ name }) => [name, [role]]));

export const demoPeople: DemoPerson[] = [
  {
    name: 'Marco Castellane',
    email: 'engineer@cupel.example',
    says: 'process engineer at every site',
    roles: everySite('engineer'),
  },
  {
    name: 'Tove Halbrook',
    email: 'technician@cupel.example',
    says: 'laboratory technician at Tarnby Works',
    roles: { 'Tarnby Works': ['technician'] },
  },
  {
    name: 'Ines Okafor-Lund',
    email: 'manager@cupel.example',
    says: 'plant manager of every site',
    roles: everySite('manager'),
  },
  {
    name: 'Ruben Achterberg',
    email: 'administrator@cupel.example',
    says: 'administrator',
    administrator: true,
    roles: {},
  },
  { name: 'Jun Brightwell', email: 'deputy@cupel.example', says: '', roles: everySite('engineer') },
];
