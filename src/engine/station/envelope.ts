/**
 * Complex envelope of all that is on the air, re the wanted station's unmodulated carrier: 1 + modulation + j·quadrature.
 * Everything that joins is added to both parts.
 */
export interface Envelope {
  /** The real part less 1. */
  readonly modulation: Float64Array;
  readonly quadrature: Float64Array;
}

/** The largest amplitude, less that of the wanted station's carrier; 0 at least. Sizes the tables of a detector. */
export function largestExcess({ modulation, quadrature }: Envelope): number {
  let most = 1;
  for (let n = 0; n < modulation.length; n++) {
    const size = Math.hypot(1 + (modulation[n] as number), quadrature[n] as number);
    if (size > most) most = size;
  }
  return most - 1;
}
