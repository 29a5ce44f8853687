import { describe, expect, it } from 'vitest';
import { boiler, boilerFlows } from '../../../seeds/physics/boiler.ts';
import { trueBoilingPoint } from '../../../seeds/physics/crude-column.ts';
import { bottomsButane, debutaniser, overheadPentane } from '../../../seeds/physics/debutaniser.ts';
import { digester, dissolvingRate, vroomRate } from '../../../seeds/physics/digester.ts';
import { boilingPointRise, evaporation, evaporator } from '../../../seeds/physics/evaporator.ts';
import { furnaceCapacities, furnaceFlows, glassFurnace } from '../../../seeds/physics/glass-furnace.ts';
import { kilnFlows, limeKiln } from '../../../seeds/physics/lime-kiln.ts';
import { integrate, radiation, settled } from '../../../seeds/physics/physical-model.ts';
import { instantaneousMeltIndex, polymerReactor } from '../../../seeds/physics/polymer-reactor.ts';
import { lumpCapacity, pusherFlows, pusherFurnace } from '../../../seeds/physics/pusher-furnace.ts';
import { aromaticsMade } from '../../../seeds/physics/reformer.ts';
import { boilingPoint, pentaneShare, vapourPressure } from '../../../seeds/physics/vapour-pressure.ts';
import { demoUnits } from '../../../seeds/units.ts';

const sum = (values: readonly number[]) => values.reduce((total, value) => total + value, 0);

describe('the integrator', () => {
  it('has done 63.2 % of a first-order response after one time constant', () => {
    const [x] = integrate(([now]) => [(1 - now!) / 600], [0], 600, 60);
    expect(x).toBeCloseTo(1 - Math.exp(-1), 6);
  });

  it('falls behind the exact answer with the fourth power of its step', () => {
    const error = (step: number) => Math.abs(integrate(([x]) => [-x!], [1], 2, step)[0]! - Math.exp(-2));
    expect(error(0.2) / error(0.1)).toBeGreaterThan(14);
    expect(error(0.2) / error(0.1)).toBeLessThan(19);
  });
});

describe('vapour pressure', () => {
  // Normal boiling points of n-butane and n-pentane: Smith, Van Ness & Abbott, table B.2 (−0.5 and 36.0 °C).
  it('is one atmosphere at the normal boiling points', () => {
    expect(vapourPressure('butane', -0.5)).toBeCloseTo(1.01325, 1);
    expect(vapourPressure('pentane', 36)).toBeCloseTo(1.01325, 1);
    expect(vapourPressure('water', 100)).toBeCloseTo(1.01325, 1);
    expect(boilingPoint('water', 1.01325)).toBeCloseTo(100, 0);
  });

  it('tells the composition of a boiling mixture, from one pure substance to the other', () => {
    const bar = 5;
    expect(pentaneShare(boilingPoint('butane', bar), bar)).toBeCloseTo(0, 9);
    expect(pentaneShare(boilingPoint('pentane', bar), bar)).toBeCloseTo(1, 9);
    expect(pentaneShare(60, bar)).toBeGreaterThan(pentaneShare(55, bar));
  });
});

describe('radiation', () => {
  it('goes from the hotter body to the colder one, with the fourth power of temperature', () => {
    expect(radiation(500, 500, 3)).toBe(0);
    expect(radiation(500, 400, 3)).toBeCloseTo(-radiation(400, 500, 3), 6);
    // Stefan–Boltzmann constant (CODATA 2018): a black square metre at 0 °C against 0 K radiates 315.6 W.
    expect(radiation(0, -273.15, 1)).toBeCloseTo(5.670_374_419e-8 * 273.15 ** 4, 6);
  });
});

describe('every unit of the demo', () => {
  it.each(demoUnits.map((unit) => [unit.name, unit] as const))(
    '%s stands still at its steady state',
    (_, unit) => {
      const u = Object.fromEntries(Object.entries(unit.drives).map(([name, { mean }]) => [name, mean]));
      const x = settled(unit.model, u, 30);
      const later = integrate((state) => unit.model.derivative(state, u), x, 86_400, unit.model.longestStepS);
      for (const [i, value] of x.entries()) expect(Math.abs(later[i]! / value - 1)).toBeLessThan(1e-6);
    },
  );

  it.each(demoUnits.map((unit) => [unit.name, unit] as const))(
    '%s gives all that is read or judged there',
    (_, unit) => {
      const u = Object.fromEntries(Object.entries(unit.drives).map(([name, { mean }]) => [name, mean]));
      const values: Record<string, number> = { ...u, ...unit.model.outputs(settled(unit.model, u), u) };
      const asked = [
        ...unit.instruments.map(({ reads }) => reads),
        ...unit.sensors.map(({ truth }) => truth),
      ];
      for (const name of asked) expect(values[name], name).toSatisfy(Number.isFinite);
    },
  );
});

describe('the glass furnace', () => {
  const furnace = { radiatingArea: 30.6, crown: 972, shell: 4607, bath: 1300, bottom: 1500, throat: 350 };
  const model = glassFurnace(furnace);
  const u = { fuel: 1430, pull: 210, oxygen: 2, ambient: 34 };

  it('stores just what its heat leaves over, wherever it stands', () => {
    const x = [1540, 310, 1400, 1050, 1240];
    const stored = sum(model.derivative(x, u).map((rate, i) => rate * furnaceCapacities[i]!));
    const q = furnaceFlows(furnace, x, u);
    const left = q.useful - q.fromShell - q.bathLoss - q.bottomLoss - q.throatLoss - q.carriedOut;
    expect(Math.abs(stored - left) / q.useful).toBeLessThan(1e-9);
  });

  it('gets hotter with more fuel and colder with more pull', () => {
    const [crown] = settled(model, u);
    expect(settled(model, { ...u, fuel: 1450 })[0]).toBeGreaterThan(crown!);
    expect(settled(model, { ...u, pull: 220 })[0]).toBeLessThan(crown!);
  });
});

describe('the pusher furnace', () => {
  const u = { zone1: 920, zone2: 1040, zone3: 1075, throughput: 6 };

  it('stores just what it absorbs and does not carry out', () => {
    const x = [600, 430, 880, 800, 1020, 990];
    const stored = sum(pusherFurnace.derivative(x, u)) * lumpCapacity;
    const q = pusherFlows(x, u);
    expect(Math.abs(stored - (sum(q.absorbed) - q.carriedOut)) / sum(q.absorbed)).toBeLessThan(1e-9);
  });

  it('brings a load that lies still to the temperature of its zones', () => {
    const x = settled(pusherFurnace, { ...u, throughput: 0 }, 60);
    for (const [i, zone] of [u.zone1, u.zone2, u.zone3].entries()) {
      expect(x[2 * i]).toBeCloseTo(zone, 3);
      expect(x[2 * i + 1]).toBeCloseTo(zone, 3);
    }
  });
});

describe('the lime kiln', () => {
  const u = { mud: 18, heat: 4.02, moisture: 22, oxygen: 2.5, ambient: 18 };

  it('spends all the heat that is fired once it is settled', () => {
    const q = kilnFlows(settled(limeKiln, u, 30), u);
    const spent = q.flue + q.calcination + q.drying + q.lime + q.shell;
    expect(Math.abs(spent / q.fired - 1)).toBeLessThan(1e-9);
  });

  it('leaves less carbonate when hotter, and between none and all of it', () => {
    const left = settled(limeKiln, u)[2]!;
    expect(left).toBeGreaterThan(0);
    expect(settled(limeKiln, { ...u, heat: 4.05 })[2]).toBeLessThan(left);
    expect(settled(limeKiln, { ...u, heat: 1 })[2]).toBeGreaterThan(0.95);
    expect(settled(limeKiln, { ...u, heat: 1 })[2]).toBeLessThan(1);
  });
});

describe('the boiler', () => {
  const u = { steam: 150, oxygen: 3.5, overFire: 20, fuelNox: 58, moisture: 45 };

  it('spends all the heat that is fired once it is settled', () => {
    const [firing, flame] = settled(boiler, u, 1);
    const q = boilerFlows(firing!, flame!, u);
    expect(Math.abs((q.water + q.gas + q.radiated) / q.fired - 1)).toBeLessThan(1e-9);
  });

  it('makes more NOx at a higher load, less with over-fire air, and never less than the fuel brings', () => {
    const nox = (own: Partial<typeof u>) => settled(boiler, { ...u, ...own }, 1)[2]!;
    expect(nox({ overFire: 25 })).toBeLessThan(nox({}));
    expect(nox({ steam: 165 })).toBeGreaterThan(nox({}));
    expect(nox({ steam: 30 })).toBeGreaterThan(u.fuelNox);
  });
});

describe('the digester', () => {
  // Vroom 1957: the relative rate of kraft cooking is 1 at 100 °C by definition.
  it('counts the H-factor from a relative rate of 1 at 100 °C', () => {
    expect(vroomRate(100)).toBeCloseTo(1, 1);
  });

  it('uses up alkali in proportion to the lignin dissolved', () => {
    const u = { chips: 60, cooking: 165, alkali: 19, liquor: 4, lignin: 27 };
    const [l1, l2, l3, a1, a2, a3] = settled(digester, u, 30);
    expect(((u.alkali * 10) / u.liquor - a3!) / (u.lignin / 100 - l3!)).toBeCloseTo(140, 6);
    expect(dissolvingRate(l1!, a1!, 165)).toBeGreaterThan(dissolvingRate(l2!, a2!, 165));
  });
});

describe('the concentrator', () => {
  it('lets out the solids that came in', () => {
    const u = { feed: 30, feedSolids: 50, steam: 140, vapour: 0.9, transfer: 616 };
    const [solids] = settled(evaporator, u, 5);
    expect((u.feed - evaporation(solids!, u)) * solids!).toBeCloseTo((u.feed * u.feedSolids) / 100, 8);
    expect(boilingPointRise(0)).toBe(0);
  });
});

describe('the debutaniser', () => {
  const u = { upper: 53.6, lower: 82, pressure: 4.95, reflux: 1.5, feed: 120 };

  it('follows its trays with the first-order hold-up of the drum', () => {
    const before = settled(debutaniser, u);
    const warmer = { ...u, upper: 54.6 };
    const [after] = integrate((x) => debutaniser.derivative(x, warmer), before, 1200, 100);
    const done = (after! - before[0]!) / (overheadPentane(warmer) - before[0]!);
    expect(done).toBeCloseTo(1 - Math.exp(-1), 4);
  });

  it('lets more pentane over when the upper tray is hotter, and less butane down when the lower one is', () => {
    expect(overheadPentane({ ...u, upper: 54 })).toBeGreaterThan(overheadPentane(u));
    expect(overheadPentane({ ...u, reflux: 2 })).toBeLessThan(overheadPentane(u));
    expect(bottomsButane({ ...u, lower: 83 })).toBeLessThan(bottomsButane(u));
  });
});

describe('the other models', () => {
  it('crude boils higher the more of it has gone over and the heavier it is', () => {
    expect(trueBoilingPoint(30, 0)).toBeGreaterThan(trueBoilingPoint(20, 0));
    expect(trueBoilingPoint(30, 1)).toBeGreaterThan(trueBoilingPoint(30, 0));
  });

  it('the reformer makes all aromatics that it can from an endless stay, and none from none', () => {
    const u = { feed: 96, inlet: 500, rich: 45, pressure: 8, activity: 1 };
    expect(aromaticsMade({ ...u, activity: 1e6 })).toBeCloseTo(100, 6);
    expect(aromaticsMade({ ...u, activity: 0 })).toBe(0);
    expect(aromaticsMade({ ...u, inlet: 501 })).toBeGreaterThan(aromaticsMade(u));
  });

  it('the polymer in the bed becomes what grows there now', () => {
    const u = { hydrogen: 0.56, bed: 70, production: 20, donor: 1 };
    const { logMeltIndex } = polymerReactor.outputs(settled(polymerReactor, u), u);
    expect(10 ** logMeltIndex).toBeCloseTo(instantaneousMeltIndex(u), 6);
  });
});
