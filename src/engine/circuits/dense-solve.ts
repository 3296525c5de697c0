/**
 * Solves M·X = Y for real matrices by Gaussian elimination with partial pivoting and row scaling
 * (rows of a circuit differ by ten powers of ten). M and Y are overwritten; Y becomes X.
 *
 * @param m     row-major n × n
 * @param n     order, 1 or more
 * @param y     row-major n × columns
 * @returns     false when the matrix is singular to working precision
 */
export function solveReal(m: Float64Array, n: number, y: Float64Array, columns: number): boolean {
  for (let r = 0; r < n; r++) {
    let largest = 0;
    for (let c = 0; c < n; c++) largest = Math.max(largest, Math.abs(m[r * n + c] as number));
    if (!(largest > 0) || !Number.isFinite(largest)) return false;
    const scale = 1 / largest;
    for (let c = 0; c < n; c++) m[r * n + c] = (m[r * n + c] as number) * scale;
    for (let c = 0; c < columns; c++) y[r * columns + c] = (y[r * columns + c] as number) * scale;
  }
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let r = k + 1; r < n; r++) {
      if (Math.abs(m[r * n + k] as number) > Math.abs(m[pivot * n + k] as number)) pivot = r;
    }
    if (!(Math.abs(m[pivot * n + k] as number) > 1e-300)) return false;
    if (pivot !== k) {
      swapRows(m, n, k, pivot);
      swapRows(y, columns, k, pivot);
    }
    const inverse = 1 / (m[k * n + k] as number);
    for (let r = k + 1; r < n; r++) {
      const factor = (m[r * n + k] as number) * inverse;
      if (factor === 0) continue;
      for (let c = k; c < n; c++) m[r * n + c] = (m[r * n + c] as number) - factor * (m[k * n + c] as number);
      for (let c = 0; c < columns; c++) {
        y[r * columns + c] = (y[r * columns + c] as number) - factor * (y[k * columns + c] as number);
      }
    }
  }
  for (let k = n - 1; k >= 0; k--) {
    const inverse = 1 / (m[k * n + k] as number);
    for (let c = 0; c < columns; c++) {
      let sum = y[k * columns + c] as number;
      for (let j = k + 1; j < n; j++) sum -= (m[k * n + j] as number) * (y[j * columns + c] as number);
      y[k * columns + c] = sum * inverse;
    }
  }
  return true;
}

function swapRows(m: Float64Array, width: number, a: number, b: number): void {
  for (let c = 0; c < width; c++) {
    const held = m[a * width + c] as number;
    m[a * width + c] = m[b * width + c] as number;
    m[b * width + c] = held;
  }
}

/**
 * Solves the complex system (A + jB)·x = p + jq through the real one of twice the order.
 *
 * @param re, im  row-major n × n
 * @param x       length 2n: real parts then imaginary parts; right-hand side in, solution out
 * @returns       false when singular
 */
export function solveComplex(re: Float64Array, im: Float64Array, n: number, x: Float64Array): boolean {
  const size = 2 * n;
  const m = new Float64Array(size * size);
  for (let r = 0; r < n; r++) {
    for (let c = 0; c < n; c++) {
      const a = re[r * n + c] as number;
      const b = im[r * n + c] as number;
      m[r * size + c] = a;
      m[r * size + n + c] = -b;
      m[(n + r) * size + c] = b;
      m[(n + r) * size + n + c] = a;
    }
  }
  return solveReal(m, size, x, 1);
}
