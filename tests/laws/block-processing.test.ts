import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { DetectorRenderer } from '../../src/engine/renderer/detector-renderer.ts';
import { renderClip } from '../../src/engine/renderer/render-clip.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { coil, gridLeak, stiff } from './grid-leak-circuit.ts';
import { seededNumbers } from './seeded-numbers.ts';

type Kind = 'fastest' | 'plain';

const RATE = 48_000;
const FRAMES = 3000;

/** Programme with everything in it: two tones, noise, and a stretch of silence, within 80 %. */
const PROGRAMME = ((): Float64Array => {
  const random = seededNumbers(17);
  return Float64Array.from({ length: FRAMES }, (_, n) => {
    if (n > 1800 && n < 2100) return 0;
    const tones = 0.4 * Math.sin(0.05 * n) + 0.25 * Math.sin(0.31 * n);
    return tones + 0.15 * (2 * random() - 1);
  });
})();

const CIRCUITS: readonly (readonly [string, DetectorCircuit])[] = [
  ['weak signal', gridLeak()],
  ['strong signal on a coil', gridLeak({ tube: '6SN7-GT', levelVoltsRms: 2, tunedCircuit: coil(100) })],
  ['station off tune, starved plate', gridLeak({ tube: '12AX7', tunedCircuit: stiff(60, 5000), supplyVolts: 22 })],
];

function renderer(circuit: DetectorCircuit, kind: Kind = 'fastest', rateHertz = RATE): DetectorRenderer {
  const rest = restPoint(circuit);
  return new DetectorRenderer(rest, new TableStore().lawsFor(rest, 0.8), rateHertz, 'normal', kind);
}

/** The programme through a renderer in blocks of the given lengths, over and over. */
function inBlocks(detector: DetectorRenderer, lengths: () => number): Float64Array {
  const output = new Float64Array(FRAMES);
  for (let from = 0; from < FRAMES; ) {
    const frames = Math.min(lengths(), FRAMES - from);
    const block = new Float64Array(frames);
    detector.process(PROGRAMME.subarray(from, from + frames), block, frames);
    output.set(block, from);
    from += frames;
  }
  return output;
}

describe.each(CIRCUITS)('%s', (_, circuit) => {
  it.each<Kind>(['fastest', 'plain'])('gives the same samples however the programme is cut, %s path', (kind) => {
    const detector = renderer(circuit, kind);
    const whole = inBlocks(detector, () => FRAMES);
    expect(whole.some((volts) => volts !== 0)).toBe(true);
    const random = seededNumbers(23);
    const cuts: Record<string, () => number> = {
      single: () => 1,
      'of 128': () => 128,
      'of 129': () => 129,
      'past the loop’s own blocks': () => 2049,
      seeded: () => 1 + Math.floor(700 * random() ** 3),
    };
    for (const [name, lengths] of Object.entries(cuts)) {
      detector.reset();
      expect(inBlocks(detector, lengths), name).toEqual(whole);
    }
  });

  it('starts over at reset, from anywhere', () => {
    const detector = renderer(circuit);
    const first = inBlocks(detector, () => FRAMES);
    const counts = detector.counts;
    for (const stop of [1, 137, 2048]) {
      detector.reset();
      detector.process(PROGRAMME, new Float64Array(stop), stop);
      detector.reset();
      expect(inBlocks(detector, () => FRAMES)).toEqual(first);
      expect(detector.counts).toEqual(counts);
    }
    expect(inBlocks(renderer(circuit), () => FRAMES)).toEqual(first);
  });

  // 1e-9: one arithmetic in two compilers, which differ in the order of the sums over the filters' taps
  it('is the same by the compiled loop as by the plain stepper', () => {
    for (const rateHertz of [44_100, 96_000]) {
      const fast = inBlocks(renderer(circuit, 'fastest', rateHertz), () => FRAMES);
      const plain = inBlocks(renderer(circuit, 'plain', rateHertz), () => FRAMES);
      const largest = plain.reduce((most, volts) => Math.max(most, Math.abs(volts)), 0);
      for (let n = 0; n < FRAMES; n++) expect(Math.abs(fast[n]! - plain[n]!) / largest).toBeLessThan(1e-9);
    }
  });

  it('renders a clip in time with itself', () => {
    const rest = restPoint(circuit);
    const laws = new TableStore().lawsFor(rest, 0.8);
    const clip = renderClip(rest, laws, PROGRAMME, RATE);
    const detector = new DetectorRenderer(rest, laws, RATE);
    const late = inBlocks(detector, () => FRAMES);
    expect(clip.volts.length).toBe(FRAMES);
    expect(clip.volts.subarray(0, FRAMES - detector.delaySamples)).toEqual(late.subarray(detector.delaySamples));
    expect(clip.unsettledSteps).toBe(0);
  });
});
