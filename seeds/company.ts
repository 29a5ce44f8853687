import type { Role } from '../shared/contracts/access.ts';

/** The demo company. Everybody and everything in it is invented. */
export const demoPassword = 'bone ash and silver';

/** `hoursAhead`: local standard time, by which shifts and days of the simulation go. */
export const demoSites = [
  { name: 'Tarnby Works', zone: 'Europe/Copenhagen', hoursAhead: 1 },
  { name: 'Ostrander Mill', zone: 'America/Chicago', hoursAhead: -6 },
  { name: 'Kallara Refinery', zone: 'Australia/Adelaide', hoursAhead: 9.5 },
] as const;
export type DemoSite = (typeof demoSites)[number]['name'];

interface DemoPerson {
  name: string;
  email: string;
  /** What a newcomer is told who may sign in as this person; empty: is not told of. */
  says: string;
  administrator?: boolean;
  roles: Partial<Record<DemoSite, Role[]>>;
}

const everySite = (role: Role): DemoPerson['roles'] =>
  Object.fromEntries(demoSites.map(({ name }) => [name, [role]]));
const at = (site: DemoSite, role: Role): DemoPerson['roles'] => ({ [site]: [role] });
const email = (local: string) => `${local}@cupel.example`;

export const demoPeople = {
  engineer: {
    name: 'Marco Castellane',
    email: email('engineer'),
    says: 'process engineer at every site',
    roles: everySite('engineer'),
  },
  technician: {
    name: 'Tove Halbrook',
    email: email('technician'),
    says: 'laboratory technician at Tarnby Works',
    roles: at('Tarnby Works', 'technician'),
  },
  manager: {
    name: 'Ines Okafor-Lund',
    email: email('manager'),
    says: 'plant manager of every site',
    roles: everySite('manager'),
  },
  administrator: {
    name: 'Ruben Achterberg',
    email: email('administrator'),
    says: 'administrator',
    administrator: true,
    roles: {},
  },
  deputy: {
    name: 'Jun Brightwell',
    email: email('deputy'),
    says: '',
    roles: everySite('engineer'),
  },
  glassEngineer: {
    name: 'Signe Vestermark',
    email: email('signe.vestermark'),
    says: '',
    roles: at('Tarnby Works', 'engineer'),
  },
  formerEngineer: {
    name: 'Oskar Lindqvale',
    email: email('oskar.lindqvale'),
    says: '',
    roles: at('Tarnby Works', 'engineer'),
  },
  glassManager: {
    name: 'Bertil Aagesholm',
    email: email('bertil.aagesholm'),
    says: '',
    roles: at('Tarnby Works', 'manager'),
  },
  pulpEngineer: {
    name: 'Delphine Arrowood',
    email: email('delphine.arrowood'),
    says: '',
    roles: at('Ostrander Mill', 'engineer'),
  },
  pulpTechnician: {
    name: 'Caleb Northwyn',
    email: email('caleb.northwyn'),
    says: '',
    roles: at('Ostrander Mill', 'technician'),
  },
  refineryEngineer: {
    name: 'Priya Wendelbourne',
    email: email('priya.wendelbourne'),
    says: '',
    roles: at('Kallara Refinery', 'engineer'),
  },
  refineryTechnician: {
    name: 'Hattie Penhallick-Roe',
    email: email('hattie.penhallick'),
    says: '',
    roles: at('Kallara Refinery', 'technician'),
  },
  refineryManager: {
    name: 'Lorna Tesselby',
    email: email('lorna.tesselby'),
    says: '',
    roles: at('Kallara Refinery', 'manager'),
  },
  reader: {
    name: 'Felix Underhay-Moss',
    email: email('felix.underhay'),
    says: '',
    roles: everySite('reader'),
  },
} satisfies Record<string, DemoPerson>;
export type PersonKey = keyof typeof demoPeople;

/** Who enters a site's laboratory results. */
export const technicianOf: Record<DemoSite, PersonKey> = {
  'Tarnby Works': 'technician',
  'Ostrander Mill': 'pulpTechnician',
  'Kallara Refinery': 'refineryTechnician',
};
