/** Boltzmann constant, J/K, exact since the SI of 2019. */
export const BOLTZMANN_JOULES_PER_KELVIN = 1.380649e-23;
/** Elementary charge, C, exact since the SI of 2019. */
export const ELEMENTARY_CHARGE_COULOMBS = 1.602176634e-19;

/**
 * Thermal voltage kT/e (V) of a cathode at `kelvin`: the e-fold of the current of a retarding field.
 *
 * Oxide cathodes work at 1000 to 1100 K, thoriated tungsten at about 1900 K, tungsten at 2400 to 2500 K
 * (F. E. Terman, Radio Engineers' Handbook, 1943, section 4, from memory). Example: 1000 K gives 86.17 mV.
 */
export function thermalVolts(kelvin: number): number {
  return (BOLTZMANN_JOULES_PER_KELVIN * kelvin) / ELEMENTARY_CHARGE_COULOMBS;
}
