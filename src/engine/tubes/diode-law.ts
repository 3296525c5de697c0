import type { SmoothLaw } from './smooth-law.ts';

/** Largest exponent that is followed; beyond it the series resistance or the circuit has long taken over. */
const MOST_EXPONENT = 200;

/**
 * A diode with series resistance, i = I_s·(exp((v − i·R)/V) − 1), with its first three derivatives by v. What is given is
 * i + I_s, which dies out below as a tabulated law must; the steady −I_s is left to the circuit.
 *
 * The junction's own voltage w obeys w + R·i(w) = v; Newton from above, where the function is convex and steadily
 * rising, so that every step comes nearer.
 *
 * @param saturationAmps  I_s, A, above 0
 * @param idealityVolts   V = n·kT/e, V, above 0
 * @param seriesOhms      R, 0 or more
 */
export function seriesDiodeLaw(saturationAmps: number, idealityVolts: number, seriesOhms: number): SmoothLaw {
  const junction = (v: number): number => {
    if (seriesOhms === 0) return Math.min(v, MOST_EXPONENT * idealityVolts);
    // two upper bounds: all of v, and the junction alone at the current that R would let through; backwards: none of v,
    // and all of it less what the saturation current leaves on R
    let w =
      v > 0
        ? Math.min(v, idealityVolts * Math.log1p(v / seriesOhms / saturationAmps))
        : Math.min(0, v + seriesOhms * saturationAmps);
    for (let pass = 0; pass < 60; pass++) {
      const e = saturationAmps * Math.exp(Math.min(w / idealityVolts, MOST_EXPONENT));
      const step = (w + seriesOhms * (e - saturationAmps) - v) / (1 + (seriesOhms * e) / idealityVolts);
      w -= step;
      if (Math.abs(step) <= 1e-15 * (idealityVolts + Math.abs(w))) break;
    }
    return w;
  };
  return {
    scaleVolts: idealityVolts,
    evaluate(volts, out) {
      const e = saturationAmps * Math.exp(Math.min(junction(volts) / idealityVolts, MOST_EXPONENT));
      // conductance of the junction, and with R in series
      const g = e / idealityVolts;
      const share = 1 / (1 + seriesOhms * g);
      out[0] = e;
      out[1] = g * share;
      // with i' = g·s and s = 1/(1 + R·g): s' = −R·g'·s², g' = (g/V)·s
      const bend = (g * share * share * share) / idealityVolts;
      out[2] = bend;
      out[3] = (bend * share * (1 - 2 * seriesOhms * g * share)) / idealityVolts;
    },
  };
}
