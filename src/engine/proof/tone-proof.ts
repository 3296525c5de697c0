import { type RestPoint, restPoint } from '../circuits/rest-point.ts';
import type { StageLaws } from '../circuits/stage-currents.ts';
import { harmonics } from '../measure/harmonics.ts';
import { runReference } from '../reference/run-reference.ts';
import { DetectorRenderer } from '../renderer/detector-renderer.ts';
import { referenceLaws, referenceSource } from './reference-request.ts';

/** What one of the two gives at the output for one tone. */
export interface ToneFigures {
  readonly fundamentalVoltsRms: number;
  readonly secondPercent: number;
  readonly thirdPercent: number;
}

/** Limits of one comparison, with which of them applies. */
export interface ProofLimits {
  readonly decibels: number;
  /** Of a second harmonic of 0.5 % or more: share of its own value. */
  readonly secondShare: number;
  /** Of a smaller one: share of the fundamental, percent. */
  readonly secondPercentOfFundamental: number;
}

export interface ToneProof {
  readonly hertz: number;
  readonly modulation: number;
  readonly rendered: ToneFigures;
  readonly reference: ToneFigures;
  /** Rendered fundamental over the reference's, dB. */
  readonly decibels: number;
  /** Rendered second harmonic less the reference's, percent of the fundamental. */
  readonly secondDifferencePercent: number;
  readonly limits: ProofLimits;
  readonly holds: boolean;
}

/** Sample rate of the compared rendering, Hz: tones of whole multiples of 25 Hz have a whole number of samples in 40 ms. */
export const PROOF_RATE_HERTZ = 96_000;
/** Every proved tone is a multiple of this, Hz. */
export const PROOF_TONE_STEP_HERTZ = 25;
/** Both run this long before they are measured, s: whole periods of every tone. */
const SETTLE_SECONDS = 0.04;
/** Bypass with strays under which, and level over which, the second carrier harmonic at the plate shows; F, V rms. */
const LITTLE_BYPASS_FARADS = 50e-12;
const STRONG_VOLTS_RMS = 0.1;
/** Second harmonic from which it is compared by its own value, percent. */
const PLAIN_SECOND_PERCENT = 0.5;

/** The error limits the renderer is built to, for this circuit. */
export function proofLimits(rest: RestPoint): ProofLimits {
  const { plate, tube, station } = rest.circuit;
  const bypass = plate.bypassFarads + tube.plateCathodeFarads;
  const loose = bypass < LITTLE_BYPASS_FARADS && station.levelVoltsRms > STRONG_VOLTS_RMS;
  return {
    decibels: loose ? 0.3 : 0.1,
    secondShare: loose ? 0.1 : 0.03,
    secondPercentOfFundamental: loose ? 0.1 * PLAIN_SECOND_PERCENT : 0.02,
  };
}

/**
 * One tone through the renderer and through the carrier-cycle reference, same circuit, same start, same window.
 *
 * @param given       the circuit at rest
 * @param laws        averaged laws as the renderer is given them
 * @param hertz       multiple of 25 Hz, 25 Hz and up
 * @param modulation  depth, above 0 to 1
 * @param onProgress  told the part done, 0 to 1; may throw to stop
 */
export function proveTone(
  given: RestPoint,
  laws: StageLaws,
  hertz: number,
  modulation: number,
  onProgress: (done: number) => void = () => {},
): ToneProof {
  const periods = hertz / commonDivisor(hertz, PROOF_RATE_HERTZ);
  const rest = atWholeCycles(given, hertz);
  const stage = referenceLaws(rest);
  const run = runReference(
    rest.circuit,
    { audioHertz: hertz, modulation, source: referenceSource(rest), ...(stage ? { stage } : {}) },
    { settleSeconds: SETTLE_SECONDS, periods, onProgress },
  );
  const reference = figures(run.output.peaks);
  const rendered = figures(renderTone(rest, laws, hertz, modulation, periods));
  const limits = proofLimits(rest);
  const decibels = 20 * Math.log10(rendered.fundamentalVoltsRms / reference.fundamentalVoltsRms);
  const secondDifferencePercent = rendered.secondPercent - reference.secondPercent;
  const allowed =
    reference.secondPercent >= PLAIN_SECOND_PERCENT
      ? limits.secondShare * reference.secondPercent
      : limits.secondPercentOfFundamental;
  return {
    hertz,
    modulation,
    rendered,
    reference,
    decibels,
    secondDifferencePercent,
    limits,
    holds: Math.abs(decibels) <= limits.decibels && Math.abs(secondDifferencePercent) <= allowed,
  };
}

/** The circuit at the nearest carrier with whole cycles in a period of the tone, as the reference runs it. */
function atWholeCycles(rest: RestPoint, hertz: number): RestPoint {
  const { circuit } = rest;
  const carrierHertz = Math.round(circuit.station.carrierHertz / hertz) * hertz;
  if (carrierHertz === circuit.station.carrierHertz) return rest;
  return restPoint({ ...circuit, station: { ...circuit.station, carrierHertz } });
}

/** Peak volts of harmonics 0 to 10 of the rendered output, measured over the same stretch as the reference. */
function renderTone(
  rest: RestPoint,
  laws: StageLaws,
  hertz: number,
  modulation: number,
  periods: number,
): Float64Array {
  const renderer = new DetectorRenderer(rest, laws, PROOF_RATE_HERTZ, 'normal');
  const frames = (periods * PROOF_RATE_HERTZ) / hertz;
  const from = SETTLE_SECONDS * PROOF_RATE_HERTZ + renderer.delaySamples;
  const input = new Float64Array(from + frames);
  const output = new Float64Array(from + frames);
  const turn = (2 * Math.PI * hertz) / PROOF_RATE_HERTZ;
  for (let n = 0; n < input.length; n++) input[n] = modulation * Math.sin(turn * n);
  renderer.process(input, output, input.length);
  return harmonics(output.subarray(from), periods, 10).amplitudes;
}

function figures(peaks: Float64Array): ToneFigures {
  const fundamental = peaks[1] as number;
  const percent = (harmonic: number): number =>
    fundamental > 0 ? (100 * (peaks[harmonic] as number)) / fundamental : 0;
  return { fundamentalVoltsRms: fundamental / Math.SQRT2, secondPercent: percent(2), thirdPercent: percent(3) };
}

function commonDivisor(a: number, b: number): number {
  return b === 0 ? a : commonDivisor(b, a % b);
}
