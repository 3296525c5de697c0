/**
 * Solves A·X = B for several right-hand sides by elimination with row pivoting.
 *
 * @param a n × n, row by row; not changed. @param b n × m, row by row; not changed.
 * @returns X, n × m. Throws RangeError when A is singular, which means a node of the circuit hangs free.
 */
export function solveDense(a: Float64Array, b: Float64Array, n: number): Float64Array {
  const m = n === 0 ? 0 : b.length / n;
  const lu = a.slice();
  const x = b.slice();
  for (let col = 0; col < n; col++) {
    let pivot = col;
    for (let r = col + 1; r < n; r++) {
      if (Math.abs(lu[r * n + col]!) > Math.abs(lu[pivot * n + col]!)) pivot = r;
    }
    const p = lu[pivot * n + col]!;
    if (!(Math.abs(p) > 0) || !Number.isFinite(p)) throw new RangeError('singular circuit matrix');
    if (pivot !== col) {
      swapRows(lu, n, pivot, col);
      swapRows(x, m, pivot, col);
    }
    for (let r = 0; r < n; r++) {
      if (r === col) continue;
      const f = lu[r * n + col]! / p;
      if (f === 0) continue;
      for (let c = col; c < n; c++) lu[r * n + c] = lu[r * n + c]! - f * lu[col * n + c]!;
      for (let c = 0; c < m; c++) x[r * m + c] = x[r * m + c]! - f * x[col * m + c]!;
    }
  }
  for (let r = 0; r < n; r++) for (let c = 0; c < m; c++) x[r * m + c] = x[r * m + c]! / lu[r * n + r]!;
  return x;
}

function swapRows(a: Float64Array, width: number, r1: number, r2: number): void {
  for (let c = 0; c < width; c++) {
    const t = a[r1 * width + c]!;
    a[r1 * width + c] = a[r2 * width + c]!;
    a[r2 * width + c] = t;
  }
}
