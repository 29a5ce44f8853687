import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant, shortText, version } from './endpoint.ts';
import { type Shift, shift } from './sampling.ts';

/** An IANA time zone that this runtime knows. */
export const zone = z.string().refine((name) => {
  try {
    return Boolean(new Intl.DateTimeFormat('en', { timeZone: name }));
  } catch {
    return false;
  }
}, 'This is no time zone. One looks like Europe/Copenhagen.');

/** What a site begins with: three shifts of eight hours. */
export const usualShifts: Shift[] = [
  { name: 'Early', from: '06:00' },
  { name: 'Late', from: '14:00' },
  { name: 'Night', from: '22:00' },
];

/** The shifts of a site's day, kept in order of time; what is wrong stands beside the name or time at fault. */
const shifts = z
  .array(shift)
  .min(1, 'Give one shift at least; it may last the whole day.')
  .max(6, 'A day has 6 shifts at most.')
  .superRefine((given, context) => {
    given.forEach(({ name, from }, index) => {
      const earlier = given.slice(0, index);
      if (earlier.some((other) => other.name.toLowerCase() === name.toLowerCase()))
        context.addIssue({
          code: 'custom',
          path: [index, 'name'],
          message: `Another shift is called ${name} already. Choose another name.`,
        });
      if (earlier.some((other) => other.from === from))
        context.addIssue({
          code: 'custom',
          path: [index, 'from'],
          message: `Another shift begins at ${from} already. Choose another time.`,
        });
    });
  })
  .overwrite((given) => [...given].sort((a, b) => a.from.localeCompare(b.from)));

export const site = z.object({
  id: idNumber,
  name: z.string(),
  zone: z.string(),
  /** When shifts begin, by the clock of the site. */
  shifts: z.array(shift),
  archivedAt: isoInstant.nullable(),
  version,
});
export type Site = z.infer<typeof site>;

export const area = z.object({
  id: idNumber,
  siteId: idNumber,
  name: z.string(),
  archivedAt: isoInstant.nullable(),
  version,
});
export type Area = z.infer<typeof area>;

export const unit = z.object({
  id: idNumber,
  siteId: idNumber,
  areaId: idNumber,
  areaName: z.string(),
  name: z.string(),
  archivedAt: isoInstant.nullable(),
  version,
});
export type Unit = z.infer<typeof unit>;

const exampleSite = {
  id: 1,
  name: 'Tarnby Works',
  zone: 'Europe/Copenhagen',
  shifts: usualShifts,
  archivedAt: null,
  version: 1,
};
const exampleArea = { id: 1, siteId: 1, name: 'Hot end', archivedAt: null, version: 1 };
const exampleUnit = {
  id: 1,
  siteId: 1,
  areaId: 1,
  areaName: 'Hot end',
  name: 'Melting furnace 1',
  archivedAt: null,
  version: 1,
};
const siteBody = z.object({ name: shortText('the site’s name', 80), zone, shifts: shifts.optional() });
const nameBody = z.object({ name: shortText('a name', 80) });
const archived = z.boolean();

export const sites = {
  'sites.list': endpoint({
    method: 'GET',
    path: '/sites',
    kind: 'json',
    summary: 'Sites that the person may see',
    access: { may: 'site.view', on: 'sites' },
    reply: z.object({ rows: z.array(site) }),
    example: { rows: [exampleSite] },
  }),
  'sites.add': endpoint({
    method: 'POST',
    path: '/sites',
    kind: 'json',
    summary: 'Add a site',
    access: { may: 'company.administer', on: 'company' },
    body: siteBody,
    reply: site,
    example: exampleSite,
  }),
  'sites.change': endpoint({
    method: 'PUT',
    path: '/sites/:siteId',
    kind: 'json',
    summary: 'Rename a site, change its zone, archive or take back',
    access: { may: 'company.administer', on: 'site' },
    params: ids('siteId'),
    body: siteBody.extend({ archived, version }),
    reply: site,
    example: exampleSite,
  }),
  'areas.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/areas',
    kind: 'json',
    summary: 'Areas of a site',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(area) }),
    example: { rows: [exampleArea] },
  }),
  'areas.add': endpoint({
    method: 'POST',
    path: '/sites/:siteId/areas',
    kind: 'json',
    summary: 'Add an area',
    access: { may: 'site.configure', on: 'site' },
    params: ids('siteId'),
    body: nameBody,
    reply: area,
    example: exampleArea,
  }),
  'areas.change': endpoint({
    method: 'PUT',
    path: '/areas/:areaId',
    kind: 'json',
    summary: 'Rename an area, archive or take back',
    access: { may: 'site.configure', on: 'area' },
    params: ids('areaId'),
    body: nameBody.extend({ archived, version }),
    reply: area,
    example: exampleArea,
  }),
  'units.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/units',
    kind: 'json',
    summary: 'Units of a site',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(unit) }),
    example: { rows: [exampleUnit] },
  }),
  'units.add': endpoint({
    method: 'POST',
    path: '/sites/:siteId/units',
    kind: 'json',
    summary: 'Add a unit',
    access: { may: 'site.configure', on: 'site' },
    params: ids('siteId'),
    body: nameBody.extend({ areaId: idNumber }),
    reply: unit,
    example: exampleUnit,
  }),
  'units.change': endpoint({
    method: 'PUT',
    path: '/units/:unitId',
    kind: 'json',
    summary: 'Rename a unit, move it to another area, archive or take back',
    access: { may: 'site.configure', on: 'unit' },
    params: ids('unitId'),
    body: nameBody.extend({ areaId: idNumber, archived, version }),
    reply: unit,
    example: exampleUnit,
  }),
};
