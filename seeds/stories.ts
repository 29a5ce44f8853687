import type { DemoSite } from './company.ts';
import {
  type Act,
  approveAndEnter,
  confirm,
  decide,
  event,
  handOver,
  leave,
  propose,
  review,
  reviseStep,
  suspend,
} from './registry/acts.ts';

/** Something done on a day since the beginning, at an hour of the site's standard time. */
export interface Happening {
  day: number;
  hour: number;
  act: Act;
}

const on = (day: number, hour: number, act: Act): Happening => ({ day, hour, act });
const minute = 60_000;

const tarnby: Happening[] = [
  on(75, 10, confirm(['TY-1402'], 'engineer')),
  on(
    76,
    13,
    review(
      'TY-1402',
      'engineer',
      'keep',
      'The crown thermocouple is to be replaced at the next cold repair.',
    ),
  ),
  // A new thermocouple of another batch: a bias, seen, corrected, and proven since.
  on(
    112,
    10,
    propose('TY-1405', 'bias', 'engineer', 'Reads high since the throat thermocouple was replaced.'),
  ),
  on(112, 15, decide('TY-1405', 'approved', 'glassManager', 'Seen with the maintenance order beside it.')),
  on(118, 10, confirm(['TY-2402', 'TY-2408', 'TY-1408'], 'engineer')),
  on(125, 10, confirm(['TY-3301', 'TY-3303'], 'glassEngineer')),
  // A step after a shutdown: the furnace was down for the hearth, and a thermocouple went back less deep.
  on(
    150,
    9,
    event(
      { unit: 'Pusher furnace 3' },
      'stop',
      { day: 150, hour: 8.2 },
      'glassEngineer',
      'Repair of the hearth',
    ),
  ),
  on(153, 9, event({ unit: 'Pusher furnace 3' }, 'start', { day: 153, hour: 3.4 }, 'glassEngineer')),
  // An ageing thermocouple: proposed two weeks ago, and nobody decided.
  on(
    168,
    10,
    propose(
      'TY-1402',
      'bias',
      'engineer',
      'Reads higher every week; the crown thermocouple is past its age.',
    ),
  ),
  on(172, 16, leave('formerEngineer')),
];

const ostrander: Happening[] = [
  on(
    70,
    9,
    handOver('AY-2301', 'pulpEngineer', 'engineer', 'Kiln and recausticising go together from now on.', true),
  ),
  on(98, 10, confirm(['AY-2301', 'AY-1201'], 'engineer')),
  on(
    104,
    11,
    suspend('AY-1207', 'pulpTechnician', 'The washers read AY-1201 now; this one misled the shift twice.'),
  ),
  on(
    110,
    14,
    review('AY-1207', 'pulpEngineer', 'retire', 'Nobody needs it once the washer panel shows AY-1201.', [
      'purpose',
      'inputs',
    ]),
  ),
  on(120, 10, confirm(['AY-4410', 'AY-4415', 'AY-3101'], 'engineer')),
  // Noise chased: every week or so a small correction the other way, and between them operators type in each difference.
  on(131, 9, propose('AY-1204', 'bias', 'pulpEngineer', 'Last results of the titration lie to one side.')),
  on(131, 14, approveAndEnter('AY-1204', 'manager', 'shift foreman, line B', 'pulpEngineer')),
  on(138, 9, propose('AY-1204', 'bias', 'pulpEngineer', 'Now to the other side.')),
  on(138, 14, approveAndEnter('AY-1204', 'manager', 'shift foreman, line A', 'pulpEngineer')),
  on(145, 9, propose('AY-1204', 'bias', 'pulpEngineer', 'And back again.')),
  on(145, 14, approveAndEnter('AY-1204', 'manager', 'shift foreman, line B', 'pulpEngineer')),
  on(153, 8, reviseStep('AY-4410', 153, minute, 'Readings arrive every minute now')),
  // A method change mistaken for drift.
  on(158, 10, propose('AY-1201', 'bias', 'pulpEngineer', 'Has drifted high for ten days.')),
  on(
    160,
    15,
    decide(
      'AY-1201',
      'declined',
      'manager',
      'All of it came in one day. Ask the laboratory what they changed.',
    ),
  ),
  on(
    163,
    11,
    event(
      { sensor: 'AY-1201' },
      'method-change',
      { day: 148, hour: 6 },
      'pulpTechnician',
      'New permanganate procedure; results lower than before',
    ),
  ),
  on(178, 17, event({ unit: 'Concentrator' }, 'stop', { day: 178, hour: 3.6 }, 'pulpEngineer', 'Tube leak')),
  on(
    180,
    10,
    handOver('AY-4412', 'pulpEngineer', 'engineer', 'Moves to the paper machine next month.', false),
  ),
];

const kallara: Happening[] = [
  on(84, 10, confirm(['AY-6110'], 'engineer')),
  on(
    90,
    13,
    review(
      'AY-6110',
      'engineer',
      'change',
      'Heavier crudes than in the training period are coming; fit it anew with them.',
      ['validity'],
    ),
  ),
  on(105, 10, confirm(['AY-7210', 'AY-9310'], 'engineer')),
  on(
    116,
    10,
    propose(
      'AY-8112',
      'as-found',
      'refineryEngineer',
      'Looked at after the change of chromatograph column: nothing to correct.',
    ),
  ),
  on(117, 15, decide('AY-8112', 'approved', 'refineryManager')),
  on(130, 10, confirm(['AY-8110', 'AY-9312', 'AY-7212'], 'refineryEngineer')),
];

/** What people did at each site in half a year; the figures of it come from the services. */
export const stories: Record<DemoSite, readonly Happening[]> = {
  'Tarnby Works': tarnby,
  'Ostrander Mill': ostrander,
  'Kallara Refinery': kallara,
};
