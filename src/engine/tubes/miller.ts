/**
 * Input capacitance of a stage, F: C_gk + C_gp·(1 + A). Printed for the builder; the circuit couples C_gp to the real plate.
 *
 * @param gridCathodeFarads  F, strays included
 * @param gridPlateFarads    F, strays included
 * @param gain               magnitude of the gain from grid to plate, 0 and up, inverting
 * Source: J. M. Miller, 1920, as stated at http://www.valvewizard.co.uk/gridstopper.html (seen): with a gain of 60 the
 * grid-plate capacitance carries 61 times the grid's swing.
 */
export function millerFarads(gridCathodeFarads: number, gridPlateFarads: number, gain: number): number {
  return gridCathodeFarads + gridPlateFarads * (1 + gain);
}
