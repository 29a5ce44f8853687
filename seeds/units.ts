import { crude } from './kallara/crude-column.ts';
import { lightEnds } from './kallara/debutaniser.ts';
import { polymers } from './kallara/polymer-reactor.ts';
import { octaneUnit } from './kallara/reformer.ts';
import { concentrator } from './ostrander/concentrator.ts';
import { continuousDigester } from './ostrander/digester.ts';
import { kiln } from './ostrander/lime-kiln.ts';
import { powerBoiler } from './ostrander/power-boiler.ts';
import type { DemoUnit } from './simulation/unit.ts';
import { furnace1 } from './tarnby/melting-furnace-1.ts';
import { furnace2 } from './tarnby/melting-furnace-2.ts';
import { pusher } from './tarnby/pusher-furnace.ts';

/** Every unit of the demo company with its soft sensors. */
export const demoUnits: readonly DemoUnit[] = [
  ...[furnace1, furnace2, pusher],
  ...[kiln, powerBoiler, continuousDigester, concentrator],
  ...[crude, lightEnds, octaneUnit, polymers],
];
