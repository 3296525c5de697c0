import { magnitude } from './complex.ts';
import { LinearResponse, REFERENCE_HERTZ } from './response.ts';
import type { RestPoint } from './rest-point.ts';

/** Parts whose audio admittance shapes the response. */
export const COST_PARTS = ['tunedCircuit', 'gridCapacitor', 'plateBypass', 'load'] as const;
export type CostPart = (typeof COST_PARTS)[number];

/**
 * dB that would come back at each frequency if one part's audio admittance alone were ideal (tuned circuit broad, grid
 * capacitor without treble effect, bypass absent, coupling and load capacitance perfect), the rest point and the
 * carrier held, both responses referred to 400 Hz. Positive comes back. Costs do not add up exactly.
 *
 * @param hertz  frequencies, Hz
 * @returns      one array a part, in the order of `hertz`
 */
export function costByPart(rest: RestPoint, hertz: readonly number[]): Record<CostPart, Float64Array> {
  const levels = (response: LinearResponse): Float64Array => {
    const reference = magnitude(response.at(REFERENCE_HERTZ).output);
    return Float64Array.from(hertz, (f) => response.decibels(f, reference));
  };
  const asIs = levels(new LinearResponse(rest));
  const cost = (part: CostPart): Float64Array =>
    levels(new LinearResponse(rest, { [part]: true })).map((db, k) => db - (asIs[k] as number));
  return {
    tunedCircuit: cost('tunedCircuit'),
    gridCapacitor: cost('gridCapacitor'),
    plateBypass: cost('plateBypass'),
    load: cost('load'),
  };
}
