import { harmonicPercent, TEST_MODULATION, totalPercent } from '../circuits/analysis.ts';
import type { DetectorCircuit } from '../circuits/circuit.ts';
import { magnitude } from '../circuits/complex.ts';
import { corners, LinearResponse, REFERENCE_HERTZ, ratioDecibels } from '../circuits/response.ts';
import { type RestPoint, restPoint } from '../circuits/rest-point.ts';
import { steadyTone } from '../circuits/steady-state.ts';
import { InputError } from '../errors.ts';

/** A figure of a circuit by which a part is chosen. */
export type Figure =
  /** dB re 400 Hz. */
  | { readonly kind: 'decibels'; readonly hertz: number }
  /** Hz; half power re 400 Hz. */
  | { readonly kind: 'high corner' }
  | { readonly kind: 'low corner' }
  /** Percent of the fundamental. */
  | {
      readonly kind: 'harmonic';
      readonly which: 'second' | 'third' | 'total';
      readonly hertz: number;
      readonly depth: number;
    }
  /** V rms. */
  | { readonly kind: 'carrier on plate' }
  /** V. */
  | { readonly kind: 'plate volts' }
  | { readonly kind: 'loaded Q' };

export interface MovedFigures {
  /** At 400 Hz. */
  readonly audioVoltsRmsAt30Percent: number;
  /** Re 400 Hz. */
  readonly decibelsAt5000Hertz: number;
  readonly highCornerHertz: number | null;
  /** At 400 Hz and 80 % modulation; null where the tone does not settle. */
  readonly secondPercent: number | null;
  readonly plateVolts: number;
  readonly loadedQ: number;
}

/** Figures of one circuit, each computed when it is asked for. */
export class CircuitFigures {
  readonly rest: RestPoint;
  private linear: LinearResponse | null = null;
  private reference = 0;

  /** Raises InputError where the circuit cannot come to rest. */
  constructor(circuit: DetectorCircuit) {
    this.rest = restPoint(circuit);
  }

  /** The figure, or null where the circuit has none: a corner that is not reached, a tone that does not settle. */
  value(figure: Figure): number | null {
    switch (figure.kind) {
      case 'decibels':
        return this.decibels(figure.hertz);
      case 'high corner':
        return corners(this.response()).highHertz;
      case 'low corner':
        return corners(this.response()).lowHertz;
      case 'harmonic': {
        const tone = unlessImpossible(() => steadyTone(this.rest, figure.hertz, figure.depth));
        if (tone === null) return null;
        return figure.which === 'total' ? totalPercent(tone) : harmonicPercent(tone, figure.which === 'second' ? 2 : 3);
      }
      case 'carrier on plate':
        return (this.rest.tuned.carrierPeakVolts * magnitude(this.rest.phasors.plate)) / Math.SQRT2;
      case 'plate volts':
        return this.rest.plateVolts;
      case 'loaded Q':
        return this.rest.tuned.loadedQ;
    }
  }

  /** Level at a frequency re 400 Hz, dB. */
  decibels(hertz: number): number {
    const response = this.response();
    return ratioDecibels(magnitude(response.at(hertz).output), this.reference);
  }

  /** Audio at 400 Hz and 30 % modulation, V rms. */
  audioVolts(): number {
    this.response();
    return (this.reference * TEST_MODULATION) / Math.SQRT2;
  }

  /** What else of a circuit moves with a part: what a builder would look at next. */
  moved(): MovedFigures {
    return {
      audioVoltsRmsAt30Percent: this.audioVolts(),
      decibelsAt5000Hertz: this.decibels(5000),
      highCornerHertz: this.value({ kind: 'high corner' }),
      secondPercent: this.value({ kind: 'harmonic', which: 'second', hertz: REFERENCE_HERTZ, depth: 0.8 }),
      plateVolts: this.rest.plateVolts,
      loadedQ: this.rest.tuned.loadedQ,
    };
  }

  private response(): LinearResponse {
    if (this.linear) return this.linear;
    const linear = new LinearResponse(this.rest);
    this.reference = magnitude(linear.at(REFERENCE_HERTZ).output);
    this.linear = linear;
    return linear;
  }
}

/** A result, or null where there can be none: a circuit that does not come to rest, a tone that does not settle. */
export function unlessImpossible<Done>(work: () => Done): Done | null {
  try {
    return work();
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}
