import { describe, expect, it } from 'vitest';
import { seriesWithin } from '../../src/cli/choice-input.ts';
import { choosePart } from '../../src/engine/choosing/choose-part.ts';
import { choosePair } from '../../src/engine/choosing/choose-two.ts';
import type { FigureGoal, Goal } from '../../src/engine/choosing/goals.ts';
import { type Analysis, analyse } from '../../src/engine/circuits/analysis.ts';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { coil, type GridLeakChoice, gridLeak, stiff } from './grid-leak-circuit.ts';

// The chosen value is put back into the whole analysis, which shares no search with the chooser. The limits are those
// that a builder could just measure, 0.02 dB and 0.5 % in frequency; the search itself ends at 1e-10 of the value.
const DECIBELS = 0.02;
const PART_OF_HERTZ = 0.005;

function finished<Answer>(search: Generator<number, Answer>): Answer {
  for (;;) {
    const step = search.next();
    if (step.done) return step.value;
  }
}

const HIGH_PLATE: GridLeakChoice = { plateOhms: 220e3, loadOhms: 1e6, tunedCircuit: stiff(30) };
const bypass = (farads: number): DetectorCircuit => gridLeak({ ...HIGH_PLATE, bypassFarads: farads });
const scale = (low: number, high: number, perDecade = 40) => ({
  low,
  high,
  perDecade,
  members: seriesWithin(low, high, 'E12'),
  zero: false,
});
const at5k = (analysis: Analysis): number => analysis.response.find((row) => row.hertz === 5000)?.decibels ?? 0;
const second = (analysis: Analysis): number =>
  analysis.distortion.find((row) => row.hertz === 400 && row.modulationPercent === 80)?.secondPercent ?? 0;

interface Case {
  readonly title: string;
  readonly goal: Goal;
  readonly low: number;
  readonly high: number;
  readonly circuitAt: (value: number) => DetectorCircuit;
  readonly figure: (analysis: Analysis) => number | null;
  readonly target: number;
  /** Largest part of the target that may be missed; absent: decibels. */
  readonly part?: number;
  readonly perDecade?: number;
}

const figureGoal = (figure: FigureGoal['figure'], target: number): Goal => ({ kind: 'figure', figure, target });
const HARMONIC = { kind: 'harmonic', which: 'second', hertz: 400, depth: 0.8 } as const;

const CASES: readonly Case[] = [
  {
    title: 'bypass for -15 dB at 5 kHz',
    goal: figureGoal({ kind: 'decibels', hertz: 5000 }, -15),
    low: 1e-12,
    high: 1e-6,
    circuitAt: bypass,
    figure: at5k,
    target: -15,
  },
  {
    title: 'bypass for a corner of 900 Hz, on a coil that it unloads',
    goal: figureGoal({ kind: 'high corner' }, 900),
    low: 10e-12,
    high: 1e-7,
    circuitAt: (farads) => gridLeak({ ...HIGH_PLATE, tunedCircuit: coil(90), bypassFarads: farads }),
    figure: (analysis) => analysis.highCornerHertz,
    target: 900,
    part: PART_OF_HERTZ,
  },
  {
    title: 'coupling for a low corner of 80 Hz',
    goal: figureGoal({ kind: 'low corner' }, 80),
    low: 1e-10,
    high: 1e-6,
    circuitAt: (farads) => gridLeak({ ...HIGH_PLATE, couplingFarads: farads }),
    figure: (analysis) => analysis.lowCornerHertz,
    target: 80,
    part: PART_OF_HERTZ,
  },
  {
    title: 'leak for a second harmonic of 12 %',
    goal: figureGoal(HARMONIC, 12),
    low: 100e3,
    high: 20e6,
    circuitAt: (ohms) => gridLeak({ ...HIGH_PLATE, leakOhms: ohms }),
    figure: second,
    target: 12,
    part: 0.001,
    perDecade: 10,
  },
  {
    title: 'bypass for 10 mV of carrier on the plate',
    goal: figureGoal({ kind: 'carrier on plate' }, 0.01),
    low: 1e-12,
    high: 1e-6,
    circuitAt: bypass,
    figure: (analysis) => analysis.figures.carrierOnPlateVoltsRms,
    target: 0.01,
    part: 0.002,
  },
  {
    title: 'load for 45 V on the plate',
    goal: figureGoal({ kind: 'plate volts' }, 45),
    low: 1e3,
    high: 1e7,
    circuitAt: (ohms) => gridLeak({ ...HIGH_PLATE, plateOhms: ohms }),
    figure: (analysis) => analysis.figures.plateVolts,
    target: 45,
    part: 0.002,
  },
  {
    title: 'tap for a loaded Q of 70',
    goal: figureGoal({ kind: 'loaded Q' }, 70),
    low: 0.05,
    high: 1,
    circuitAt: (tap) => gridLeak({ ...HIGH_PLATE, tunedCircuit: coil(90, tap) }),
    figure: (analysis) => analysis.rest.tuned.loadedQ,
    target: 70,
    part: 0.002,
  },
  {
    title: 'the loudest bypass with a corner above 1 kHz, which stands at the limit',
    goal: { kind: 'loudest', limit: { figure: { kind: 'high corner' }, target: 1000, side: 'above' } },
    low: 1e-12,
    high: 1e-6,
    circuitAt: (farads) => gridLeak({ ...HIGH_PLATE, tunedCircuit: coil(90), bypassFarads: farads }),
    figure: (analysis) => analysis.highCornerHertz,
    target: 1000,
    part: PART_OF_HERTZ,
  },
];

describe('a chosen value put back into the analysis meets its goal', () => {
  it.each(CASES)('$title', ({ goal, low, high, circuitAt, figure, target, part, perDecade }) => {
    const found = finished(choosePart({ goal, scale: scale(low, high, perDecade), circuitAt }));
    expect(found.exact.length).toBeGreaterThan(0);
    for (const value of found.exact) {
      const reached = figure(analyse(circuitAt(value))) as number;
      expect(Math.abs(reached - target)).toBeLessThan(part === undefined ? DECIBELS : part * target);
    }
    expect(seriesWithin(low, high, 'E12')).toContain(found.best);
  });

  it('two goals at once: corner and second harmonic, with bypass and leak', () => {
    const circuitAt = ([farads, ohms]: readonly [number, number]): DetectorCircuit =>
      gridLeak({ ...HIGH_PLATE, bypassFarads: farads, leakOhms: ohms });
    // what 470 pF and 3 MΩ give, so that there is an answer
    const sought = analyse(circuitAt([470e-12, 3e6]));
    const [hertz, percent] = [sought.highCornerHertz as number, second(sought)];
    const goals = [
      { kind: 'figure', figure: { kind: 'high corner' }, target: hertz },
      { kind: 'figure', figure: HARMONIC, target: percent },
    ] as const;
    const scales = [scale(1e-11, 1e-7), scale(100e3, 20e6)] as const;
    const found = finished(choosePair({ goals, scales, standing: [220e-12, 2.2e6], circuitAt }));
    expect(found.exact.length).toBeGreaterThan(0);
    for (const pair of found.exact) {
      const analysis = analyse(circuitAt(pair));
      expect(Math.abs((analysis.highCornerHertz as number) / hertz - 1)).toBeLessThan(PART_OF_HERTZ);
      expect(Math.abs(second(analysis) / percent - 1)).toBeLessThan(0.001);
    }
    expect(scales[0].members).toContain(found.best?.[0]);
    expect(scales[1].members).toContain(found.best?.[1]);
  });
});

describe('what cannot be', () => {
  it('a corner that no bypass gives: nothing exact, the nearest is the highest that can be had', () => {
    const goal = figureGoal({ kind: 'high corner' }, 8000);
    const found = finished(choosePart({ goal, scale: scale(1e-12, 1e-6), circuitAt: bypass }));
    expect(found.exact).toEqual([]);
    const nearest = analyse(bypass(found.nearest as number)).highCornerHertz as number;
    for (const farads of [1e-12, 1e-11, 1e-10, 1e-9]) {
      // the search ends at a part in a million of the value
      expect(analyse(bypass(farads)).highCornerHertz).toBeLessThanOrEqual(nearest * (1 + 1e-5));
    }
  });
});
