/** Metres to the inch. */
const INCH = 0.0254;

/**
 * Inductance of a single-layer coil, H: L(µH) = r²N²/(9r + 10l), r and l in inches, within 1 % when the winding is longer
 * than 0.8 of its radius.
 *
 * Source: H. A. Wheeler, Simple inductance formulas for radio coils, Proc. IRE 16, 1928 (from memory).
 *
 * @param turns           1 and up
 * @param diameterMetres  mean diameter of the winding, m
 * @param lengthMetres    length of the winding, m
 */
export function singleLayerHenries(turns: number, diameterMetres: number, lengthMetres: number): number {
  const radius = diameterMetres / 2 / INCH;
  const length = lengthMetres / INCH;
  return ((radius * radius * turns * turns) / (9 * radius + 10 * length)) * 1e-6;
}
