/**
 * Carrier in e-folds x, ln I0(x), I1(x)/I0(x), of the modified Bessel functions; computed from their series, five or six
 * figures each.
 */
export const BESSEL_ROWS: readonly (readonly [number, number, number])[] = [
  [0.1, 0.002498, 0.04994],
  [0.5, 0.06155, 0.2425],
  [1, 0.235914, 0.44639],
  [2, 0.823994, 0.69777],
  [5, 3.304682, 0.89338],
  [10, 7.942972, 0.9486],
  [20, 17.58961, 0.97467],
  [100, 96.779733, 0.99499],
];
