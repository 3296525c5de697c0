/**
 * Chance that Student's t with `degrees` of freedom (1 or more, whole) lies between −t and t: the finite series of
 * M. Abramowitz and I. A. Stegun, Handbook of Mathematical Functions, 1964, 26.7.3 and 26.7.4 (from memory).
 */
export function studentWithin(t: number, degrees: number): number {
  const angle = Math.atan(t / Math.sqrt(degrees));
  const cos2 = Math.cos(angle) ** 2;
  const odd = degrees % 2 === 1;
  let term = odd ? Math.cos(angle) : 1;
  let sum = odd && degrees === 1 ? 0 : term;
  for (let k = odd ? 3 : 2; k <= degrees - 2; k += 2) {
    term *= ((k - 1) / k) * cos2;
    sum += term;
  }
  return odd ? (2 / Math.PI) * (angle + Math.sin(angle) * sum) : Math.sin(angle) * sum;
}

/** The t within which Student's t with `degrees` of freedom lies with the chance `share`, above 0 and below 1. */
export function studentQuantile(share: number, degrees: number): number {
  let low = 0;
  let high = 1;
  while (studentWithin(high, degrees) < share) high *= 2;
  while (high - low > 1e-10 * high) {
    const middle = 0.5 * (low + high);
    if (studentWithin(middle, degrees) < share) low = middle;
    else high = middle;
  }
  return high;
}
