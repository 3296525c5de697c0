/**
 * The law of a triode: one smooth 3/2-power law for the cathode current and one smooth form for the grid current.
 *
 *   u   = v_g + v_p / mu + phi                              (V)
 *   I_k = G · ( ln(1 + exp(C·u)) / C )^gamma                (A)
 *   I_g = Gg · ( ln(1 + exp(Cg·v_g)) / Cg )^xi              (A)
 *   I_p = I_k · s(v_p) − I_g,  s = tanh(v_p / 1.5 V) above zero, 0 below
 *
 * Source of the closed form: K. Dempwolf and U. Zölzer, "A physically-motivated triode model for circuit
 * simulations", Proc. DAFx-11, 2011 (from memory); the contact potential phi is the classical term.
 */
export interface TubeLaw {
  /** Perveance of the whole tube, A/V^gamma, above 0. */
  readonly G: number;
  /** Sharpness of the knee at cut-off, 1/V, above 0. */
  readonly C: number;
  /** Exponent of the cathode law, about 1.5. */
  readonly gamma: number;
  /** Amplification factor, above 1. */
  readonly mu: number;
  /** Contact potential with initial velocity, V. */
  readonly phi: number;
  /** Perveance of the grid, A/V^xi; 0 for a tube whose grid draws nothing. */
  readonly Gg: number;
  /** Sharpness of the grid law, 1/V; the e-fold below zero is 1/(xi·Cg). */
  readonly Cg: number;
  /** Exponent of the grid law, 1.5 unless given. */
  readonly xi: number;
}

/** A tube in its socket: its law and its capacitances with wiring strays folded in (F). */
export interface Tube {
  readonly type: string;
  readonly law: TubeLaw;
  readonly gridPlateFarads: number;
  readonly gridCathodeFarads: number;
  readonly plateCathodeFarads: number;
}

/** Plate volts over which the current rises from nothing, V: a stated convention, not a fit (0.3 % at 5 V). */
export const PLATE_KNEE_VOLTS = 1.5;
