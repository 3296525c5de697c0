import { solveComplex, solveReal } from './dense-solve.ts';
import { stampTransformer } from './load-transformer.ts';
import { CATHODE, Network } from './network.ts';
import type { ReadTransformer, TransformerReadings } from './transformer-readings.ts';

/** How the core's loss is known: absent, so many ohms a henry of primary, or to be found from the loss at mid frequencies. */
export type CoreLoss = 'none' | 'in proportion' | 'read';

/** Logarithms by which values are moved to find the slopes. */
const ASIDE = 1e-5;
/** Frequencies on either side of the peak between which the level must be even. */
const NEAR = 1.001;

/** A transformer on the bench as the program's own network, and the search for the values that give what was read. */
export class TransformerOnTheBench {
  private readonly readings: TransformerReadings;
  private readonly primaryFarads: number;

  constructor(readings: TransformerReadings, primaryFarads: number) {
    this.readings = readings;
    this.primaryFarads = primaryFarads;
  }

  /**
   * Newton on the logarithms of the values, each step shortened until it helps.
   *
   * @param start  a first guess; capacitances with the meter's
   * @param core   how the core's loss is known
   * @param ohms   a henry (`in proportion`), or the first guess (`read`)
   * @param met    logarithm of level to which the readings must be met
   * @returns      null when nothing meets them
   */
  solve(start: ReadTransformer, core: CoreLoss, ohms: number, met: number): ReadTransformer | null {
    const valuesAt = (x: Float64Array): ReadTransformer => {
      const [primary, leakage, farads, loss] = x;
      const primaryHenries = start.primaryHenries * Math.exp(primary as number);
      return {
        primaryHenries,
        leakageHenries: start.leakageHenries * Math.exp(leakage as number),
        secondaryFarads: start.secondaryFarads * Math.exp(farads as number),
        coreLossOhms:
          core === 'none' ? null : core === 'read' ? ohms * Math.exp(loss as number) : ohms * primaryHenries,
        primaryFarads: this.primaryFarads,
      };
    };
    let x = new Float64Array(core === 'read' ? 4 : 3);
    const errorsAt = (at: Float64Array): number[] => this.errors(valuesAt(at)).slice(0, at.length);
    let errors = errorsAt(x);
    for (let pass = 0; pass < 60 && Math.hypot(...errors) > 1e-3 * met; pass++) {
      const n = x.length;
      const slopes = new Float64Array(n * n);
      for (let c = 0; c < n; c++) {
        const near = x.slice();
        near[c] = (near[c] as number) + ASIDE;
        errorsAt(near).forEach((moved, r) => {
          slopes[r * n + c] = (moved - (errors[r] as number)) / ASIDE;
        });
      }
      const step = Float64Array.from(errors);
      if (!solveReal(slopes, n, step, 1)) break;
      // no value moves by more than a factor of two at a time
      let share = Math.min(1, Math.LN2 / step.reduce((most, value) => Math.max(most, Math.abs(value)), 0));
      const size = Math.hypot(...errors);
      let better = false;
      for (; share > 1e-6 && !better; share /= 2) {
        const trial = x.map((value, k) => value - share * (step[k] as number));
        const left = errorsAt(trial);
        better = Math.hypot(...left) < size;
        if (better) [x, errors] = [trial, left];
      }
      if (!better) break;
    }
    return Math.hypot(...errors) < met ? valuesAt(x) : null;
  }

  /** How far the primary would stand below the open generator at mid frequencies, dB. */
  lossDecibels(values: ReadTransformer): number {
    const { lowCornerHertz, peakHertz } = this.readings;
    return -20 * Math.log10(this.levels(values)(Math.sqrt(lowCornerHertz * peakHertz)).primary);
  }

  /** How far a transformer's own readings are from those taken: of the corner, the peak's place, its height, the loss. */
  private errors(values: ReadTransformer): [number, number, number, number] {
    const at = this.levels(values);
    const { lowCornerHertz, peakHertz, peakDecibels, midLossDecibels } = this.readings;
    const mid = at(Math.sqrt(lowCornerHertz * peakHertz));
    return [
      Math.log(at(lowCornerHertz).out / mid.out) + 0.5 * Math.LN2,
      // over the logarithm of frequency the level is flat at the peak
      Math.log(at(peakHertz * NEAR).out / at(peakHertz / NEAR).out) / (2 * Math.log(NEAR)),
      Math.log(at(peakHertz).out / mid.out) - (peakDecibels * Math.LN10) / 20,
      Math.log(mid.primary) + ((midLossDecibels ?? 0) * Math.LN10) / 20,
    ];
  }

  /** Volts at the output and across the primary, for one volt of the generator. */
  private levels(values: ReadTransformer): (hertz: number) => { readonly out: number; readonly primary: number } {
    const { ratio, sourceOhms, loadOhms, primaryDcOhms, secondaryDcOhms } = this.readings;
    const network = new Network();
    const high = network.node();
    network.resistor(high, CATHODE, sourceOhms);
    const parts = { ...values, ratio, primaryDcOhms, secondaryDcOhms };
    const end = stampTransformer(network, high, CATHODE, parts, false);
    if (loadOhms !== null) network.resistor(end, CATHODE, loadOhms);
    const { size: n, conductance, storage } = network.assemble();
    return (hertz) => {
      const volts = new Float64Array(2 * n);
      // the generator as a current into its own resistance
      volts[high] = 1 / sourceOhms;
      const reactive = storage.map((value) => value * 2 * Math.PI * hertz);
      solveComplex(conductance, reactive, n, volts);
      const level = (node: number): number => Math.hypot(volts[node] as number, volts[n + node] as number);
      return { out: level(end), primary: level(high) };
    };
  }
}
