import { expect, it } from 'vitest';
import { seriesDiodeLaw } from '../../src/engine/tubes/diode-law.ts';

// saturation A, ideality V, series Ω: usual ones, and parts whose saturation current alone leaves volts on the resistor
it.each([
  [4e-7, 0.0292, 20],
  [1e-6, 0.0432, 300],
  [0.01, 0.0432, 300],
  [0.01, 0.0167, 165.6],
  [1e-9, 0.0127, 1e6],
  [1e-6, 0.0432, 0],
])(
  'a diode of %g A, %g V, %g Ω obeys its own equation and slope from -10 V to 10 V',
  (saturation, ideality, series) => {
    const law = seriesDiodeLaw(saturation, ideality, series);
    const [at, near] = [new Float64Array(4), new Float64Array(4)];
    for (let v = -10; v <= (series === 0 ? 0.5 : 10); v += 0.0137) {
      law.evaluate(v, at);
      const amps = (at[0] as number) - saturation;
      // the junction's volts from its current, put together with the resistor's: rounding alone is left; where nothing
      // but the saturation current flows the logarithm has no digits to give
      if ((at[0] as number) > 1e-6 * saturation) {
        const volts = ideality * Math.log((at[0] as number) / saturation) + series * amps;
        expect(Math.abs(volts - v), `${v} V`).toBeLessThan(1e-8 * (1 + Math.abs(v)));
      }
      // central difference over 1e-5 e-folds: its own error is about 1e-9 of the slope, and rounding 1e-5
      const step = 1e-5 * ideality;
      law.evaluate(v + step, near);
      const above = near[0] as number;
      law.evaluate(v - step, near);
      const slope = (above - (near[0] as number)) / (2 * step);
      expect(Math.abs(slope - (at[1] as number)), `slope at ${v} V`).toBeLessThan(
        1e-4 * Math.abs(at[1] as number) + (1e-9 * (saturation + (at[0] as number))) / step,
      );
    }
  },
);
