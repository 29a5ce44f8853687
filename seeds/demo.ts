import type { Context } from '../server/context.ts';
import { findActor, findPersonByEmail } from '../server/features/people/repo.ts';
import type { By } from '../server/features/register/service.ts';
import type { SiteRow } from '../server/features/sites/repo.ts';
import type { Origin } from '../server/http/request.ts';
import type { Permitted } from '../server/http/rows.ts';
import { demoPassword, demoPeople } from './company.ts';
import { seedPeople } from './people.ts';
import { ostranderAndKallaraSensors } from './ostrander-and-kallara.ts';
import { tarnbySensors } from './tarnby.ts';
import { type DemoActors, seedSoftSensor } from './soft-sensor.ts';

const origin: Origin = { requestId: 'demo', fromAddress: '' };

/** Fills an empty database with the demo company. Jobs that it queues compute estimates and judge them. */
export async function seedDemo(context: Context): Promise<void> {
  const sites = await seedPeople(context);
  const actors = await demoActors(context);
  for (const [index, sensor] of [...tarnbySensors, ...ostranderAndKallaraSensors].entries()) {
    await seedSoftSensor(context, actors, sites.get(sensor.site) as Permitted<SiteRow>, sensor, 11 + index);
  }
}

async function demoActors(context: Context): Promise<DemoActors> {
  const by = async (email: string): Promise<By> => {
    const person = await findPersonByEmail(context.db, email);
    return { actor: (await findActor(context.db, person!.id))!, origin };
  };
  const [engineer, manager, technician, deputy] = await Promise.all(
    ['engineer', 'manager', 'technician', 'deputy'].map((who) => by(`${who}@cupel.example`)),
  );
  return {
    engineer: engineer!,
    manager: manager!,
    technicianId: technician!.actor.id,
    ownerId: engineer!.actor.id,
    deputyId: deputy!.actor.id,
    managerId: manager!.actor.id,
  };
}

/** Lines that tell a newcomer how to sign in; none where the demo's people were not put in or have gone. */
export async function demoSignIns(context: Context): Promise<string[]> {
  const present = await Promise.all(
    demoPeople.map(async (person) => ((await findPersonByEmail(context.db, person.email)) ? person : null)),
  );
  const named = present.filter((person) => person !== null && person.says !== '');
  if (named.length === 0) return [];
  return [
    `Sign in with the password "${demoPassword}" as one of the demo's people:`,
    ...named.map((person) => `  ${person!.email.padEnd(28)} ${person!.name}, ${person!.says}`),
  ];
}
