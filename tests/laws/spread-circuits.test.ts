import { describe, expect, it } from 'vitest';
import { harmonicPercent, responseRows } from '../../src/engine/circuits/analysis.ts';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { corners, LinearResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { SURVEYED, steadyTone } from '../../src/engine/circuits/steady-state.ts';
import { drawnShares } from '../../src/engine/spread/draws.ts';
import { tolerancedParts } from '../../src/engine/spread/part-tolerances.ts';
import { listVariants } from '../../src/list/variants.ts';
import type { FigureRecord, SpreadPart, SpreadResult } from '../../src/results/spread-result.ts';
import { freshFolder, ran, saved } from '../exact/command-run.ts';
import { overDecades, seededNumbers } from './seeded-numbers.ts';

const RUNS = 50;
const SEED = 11;
const LIST = 'plate: { bypass: 470 pF -20/+50 % }\n';

/** What is asked of one circuit, worked out by the analysis of one circuit. */
interface Direct {
  readonly decibels: readonly number[];
  readonly volts: number;
  readonly low: number | null;
  readonly high: number | null;
  readonly plate: number;
  readonly second: number;
}

function analysed(circuit: DetectorCircuit): Direct {
  const rest = restPoint(circuit);
  const rows = responseRows(rest);
  const { lowHertz, highHertz } = corners(new LinearResponse(rest));
  return {
    decibels: rows.map((row) => row.decibels),
    volts: rows.find((row) => row.hertz === 400)!.voltsRmsAt30Percent,
    low: lowHertz,
    high: highHertz,
    plate: rest.plateVolts,
    second: harmonicPercent(steadyTone(rest, 400, 0.8), 2),
  };
}

/** The circuit with each part at its share of the way through its tolerance, by way of the list where the list has it. */
function offNominal(parts: readonly SpreadPart[], shares: readonly number[]): DetectorCircuit {
  let tubeFactor = 1;
  const settings = parts.flatMap(({ key, least, most, evenIn }, k) => {
    const share = shares[k]!;
    const value = evenIn === 'ratio' ? overDecades(share, least, most) : least + (most - least) * share;
    if (key !== 'detector.tube') return [{ key, value: String(value), where: key }];
    tubeFactor = value;
    return [];
  });
  const { circuit } = listVariants('', 'set.yaml', settings)[0]!;
  const { law } = circuit.tube;
  return { ...circuit, tube: { ...circuit.tube, law: { ...law, G: law.G * tubeFactor } } };
}

async function spreadOf(text: string, ...flags: string[]): Promise<SpreadResult> {
  const list = saved(freshFolder(), 'set.yaml', text);
  const { status, out, err } = await ran(['spread', list, '--json', ...flags]);
  if (status !== 0) throw new Error(err);
  return JSON.parse(out) as SpreadResult;
}

describe('the spread of a set', async () => {
  const result = await spreadOf(LIST, '--runs', String(RUNS), '--seed', String(SEED));
  const variant = result.variants[0]!;
  const { circuit } = listVariants(LIST, 'set.yaml')[0]!;
  const stated = { 'plate.bypass': { least: 0.8, most: 1.5, evenIn: 'value' } } as const;
  const rows = drawnShares(tolerancedParts(circuit, stated, 'old'), SEED, RUNS);
  const direct = rows.map((shares) => analysed(offNominal(variant.parts, shares)));
  const nominal = analysed(circuit);

  const held = (figure: FigureRecord, values: readonly number[], own: number, within: number): void => {
    const sorted = [...values].sort((a, b) => a - b);
    // 50 values: 5 % lies 0.45 of the way from the third to the fourth, 95 % likewise from the top
    const between = (k: number, part: number): number => sorted[k]! + part * (sorted[k + 1]! - sorted[k]!);
    const wanted = {
      nominal: own,
      mean: values.reduce((sum, value) => sum + value, 0) / RUNS,
      least: sorted[0]!,
      low5: between(2, 0.45),
      median: between(24, 0.5),
      high95: between(46, 0.55),
      most: sorted[49]!,
    };
    for (const [key, value] of Object.entries(wanted)) {
      const found = figure[key as keyof FigureRecord];
      expect(Math.abs((found ?? Number.NaN) - value), key).toBeLessThan(within * Math.max(1, Math.abs(value)));
    }
  };

  // the law of a tube with a stated grid current is fitted anew, 1e-10 apart; a corner is bisected to 1e-15
  const ALIKE = 1e-7;

  it('is the mean and band of the same circuits worked out one by one', () => {
    expect(variant.circuits).toBe(RUNS);
    variant.response.forEach((row, k) => {
      held(
        row,
        direct.map((one) => one.decibels[k]!),
        nominal.decibels[k]!,
        ALIKE,
      );
    });
    const level = (one: Direct): number => one.volts;
    held(variant.levelVoltsRmsAt30Percent, direct.map(level), nominal.volts, ALIKE);
    const highs = direct.map((one) => one.high!);
    held(variant.highCornerHertz, highs, nominal.high!, ALIKE);
    const lows = direct.map((one) => one.low!);
    held(variant.lowCornerHertz, lows, nominal.low!, ALIKE);
    const plates = direct.map((one) => one.plate);
    held(variant.plateVolts, plates, nominal.plate, ALIKE);
  });

  it('has the second harmonic within what a survey may be off', () => {
    const seconds = direct.map((one) => one.second);
    // the survey's fewer instants: a thousandth of the value
    held(variant.secondPercent, seconds, nominal.second, 1e-3);
  });

  it('has each part at both its ends, and all at once at those that act alike', () => {
    const end = (key: string, factor: number): Direct => {
      const parts = variant.parts.map((part) => ({ ...part, least: part.nominal, most: part.nominal }));
      const shares = parts.map(() => 0);
      return analysed(
        offNominal(
          parts.map((part) => (part.key === key ? { ...part, least: part.nominal * factor } : part)),
          shares,
        ),
      );
    };
    const treble = variant.response.findIndex((row) => row.hertz === 5000);
    for (const [key, low, high] of [
      ['plate.bypass', 0.8, 1.5],
      ['detector.leak', 0.9, 1.3],
      ['detector.tube', 0.75, 1.25],
    ] as const) {
      const part = variant.parts.find((one) => one.key === key)!;
      for (const [found, factor] of [
        [part.atLeast, low],
        [part.atMost, high],
      ] as const) {
        const wanted = end(key, factor);
        expect(found).toMatchObject({
          fiveKilohertzDecibels: expect.closeTo(wanted.decibels[treble]!, 6),
          levelVoltsRmsAt30Percent: expect.closeTo(wanted.volts, 9),
          plateVolts: expect.closeTo(wanted.plate, 6),
        });
      }
    }
    // the joint corners lie outside of every circuit drawn, for the figure each is sought for
    const { dullest, brightest, weakest, loudest } = variant.corners;
    const trebles = variant.response[treble]!;
    expect(dullest.figures).toMatchObject({ fiveKilohertzDecibels: expect.any(Number) });
    if ('failed' in dullest.figures || 'failed' in brightest.figures) throw new Error('no such corner');
    if ('failed' in weakest.figures || 'failed' in loudest.figures) throw new Error('no such corner');
    expect(dullest.figures.fiveKilohertzDecibels).toBeLessThan(trebles.least!);
    expect(brightest.figures.fiveKilohertzDecibels).toBeGreaterThan(trebles.most!);
    expect(weakest.figures.levelVoltsRmsAt30Percent).toBeLessThan(variant.levelVoltsRmsAt30Percent.least!);
    expect(loudest.figures.levelVoltsRmsAt30Percent).toBeGreaterThan(variant.levelVoltsRmsAt30Percent.most!);
    // a larger leak and a smaller bypass each do what they do to the treble (trade's rule, and the ends above)
    expect(dullest.values['detector.leak']! / 2.2e6).toBeCloseTo(1.3, 9);
    expect(brightest.values['plate.bypass']! / 470e-12).toBeCloseTo(0.8, 9);
  });
});

describe('circuits that cannot be', () => {
  // a carrier choke with little ahead of it makes the plate inductive at the carrier: with less still it oscillates
  const LIST_AT_THE_EDGE = 'plate: { bypass: 20p, carrier choke: 1 mH, second bypass: 220p }\n';

  it('are counted, left out, and named', async () => {
    const list = saved(freshFolder(), 'edge.yaml', LIST_AT_THE_EDGE);
    const shown = await ran(['spread', list, '--runs', '50']);
    const { variants } = JSON.parse((await ran(['spread', list, '--runs', '50', '--json'])).out) as SpreadResult;
    const { circuits, failed, parts } = variants[0]!;
    const lost = failed.oscillates ?? 0;
    expect(lost).toBeGreaterThan(0);
    expect(circuits + lost).toBe(50);
    expect(parts.find((part) => part.key === 'plate.bypass')?.atLeast).toEqual({ failed: 'oscillates' });
    expect(shown.out).toContain(`${lost} of 50 circuits left out: the stage would oscillate.`);
  });

  it('are a fault of the input where the nominal one is such', async () => {
    const list = saved(freshFolder(), 'edge.yaml', LIST_AT_THE_EDGE.replace('20p', '5p'));
    const { status, out, err } = await ran(['spread', list, '--runs', '50']);
    expect([status, out]).toEqual([2, '']);
    expect(err).toContain('oscillate');
  });
});

describe('a surveyed tone', () => {
  it('keeps the second harmonic within a thousandth of its value', () => {
    const next = seededNumbers(3);
    for (let k = 0; k < 8; k++) {
      const level = overDecades(next(), 0.01, 2);
      const bypass = overDecades(next(), 30e-12, 2e-9);
      const loads = ['resistor 47k', 'transformer 1:3', 'choke 100 H', 'resistor 220k'];
      const circuit = k % 2 === 0 ? 'tuned circuit: { loaded Q: 40 }' : 'tuned circuit: { coil: 200u }';
      const text = `${circuit}\nstation: { level: ${level} }\nplate: { bypass: ${bypass}, load: ${loads[k % 4]} }\n`;
      const rest = restPoint(listVariants(text, 'set.yaml')[0]!.circuit);
      const [fine, coarse] = [steadyTone(rest, 400, 0.8), steadyTone(rest, 400, 0.8, SURVEYED)];
      const [wanted, found] = [harmonicPercent(fine, 2), harmonicPercent(coarse, 2)];
      expect(Math.abs(found / wanted - 1), text).toBeLessThan(1e-3);
      expect(Math.abs(coarse.output[1]! / fine.output[1]! - 1), text).toBeLessThan(1e-4);
    }
  });
});
