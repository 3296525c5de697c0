// The grid-leak stage's step in AssemblyScript: the same arithmetic as stage-stepper.ts, which tests compare it with.
// Numbers stand where layout.ts says; nothing is allocated.
import * as L from './layout';

const KNEE_VOLTS: f64 = 1.5;
const KNEE_DONE: f64 = 19.0 * 1.5;

// @ts-expect-error: decorator
@inline function rd(i: i32): f64 { return load<f64>(i << 3); }
// @ts-expect-error: decorator
@inline function wr(i: i32, v: f64): void { store<f64>(i << 3, v); }
// @ts-expect-error: decorator
@inline function addr(i: i32): i32 { return load<i32>(i << 3); }

// one cubic in t of mean and chord together, and its slope; a cell's rows are 64 bytes apart
// @ts-expect-error: decorator
@inline function cubic(p: i32, t: v128): v128 {
  return f64x2.add(f64x2.mul(f64x2.add(f64x2.mul(f64x2.add(f64x2.mul(v128.load(p, 48), t), v128.load(p, 32)), t), v128.load(p, 16)), t), v128.load(p));
}
// @ts-expect-error: decorator
@inline function slopeOf(p: i32, t: v128): v128 {
  const three = f64x2.mul(f64x2.splat(3), v128.load(p, 48));
  const two = f64x2.mul(f64x2.splat(2), v128.load(p, 32));
  return f64x2.add(f64x2.mul(f64x2.add(f64x2.mul(three, t), two), t), v128.load(p, 16));
}
// @ts-expect-error: decorator
@inline function horner(a3: v128, a2: v128, a1: v128, a0: v128, s: v128): v128 {
  return f64x2.add(f64x2.mul(f64x2.add(f64x2.mul(f64x2.add(f64x2.mul(a3, s), a2), s), a1), s), a0);
}

// cell of a point: leaves s and t in globals, returns the address
let s: f64 = 0;
let t: f64 = 0;
let perS: f64 = 0;
let perT: f64 = 0;

// @ts-expect-error: decorator
@inline function cell(h: i32, crest: f64, a: f64): i32 {
  const ck = addr(h + 7), ci = addr(h + 8), cx = addr(h + 9);
  const pk = addr(h + 10), pi = addr(h + 11), px = addr(h + 12);
  let i = load<i32>(cx + (i32((crest - rd(h)) * rd(h + 3)) << 2));
  if (crest >= load<f64>(ck + (i << 3), 8) && i < addr(h + 5)) i++;
  let j = load<i32>(px + (i32(a * rd(h + 4)) << 2));
  const cells = addr(h + 6);
  if (a >= load<f64>(pk + (j << 3), 8) && j < cells - 1) j++;
  perS = load<f64>(ci + (i << 3));
  perT = load<f64>(pi + (j << 3));
  s = (crest - load<f64>(ck + (i << 3))) * perS;
  t = (a - load<f64>(pk + (j << 3))) * perT;
  return addr(h + 13) + ((i * cells + j) << 8);
}

// mean and chord at a point; a search that has lost its way may ask for a peak below nothing
// @ts-expect-error: decorator
@inline function levels(h: i32, x: f64, a: f64): v128 {
  const crest = x + a;
  if (!(crest > rd(h))) return f64x2.splat(0);
  if (!(crest < rd(h + 1))) {
    full(h, x, a);
    return f64x2(rd(L.RESULT), rd(L.RESULT + 3));
  }
  const p = cell(h, crest, max(0, min(a, rd(h + 2))));
  const u = f64x2.splat(t);
  return horner(cubic(p + 192, u), cubic(p + 128, u), cubic(p + 64, u), cubic(p, u), f64x2.splat(s));
}

// six figures to RESULT
function full(h: i32, x: f64, a: f64): void {
  const crest = x + a;
  if (!(crest > rd(h))) {
    for (let k = 0; k < 6; k++) wr(L.RESULT + k, 0);
    return;
  }
  const inside = min(crest, rd(h + 1));
  const p = cell(h, inside, max(0, min(a, rd(h + 2))));
  const u = f64x2.splat(t);
  const w = f64x2.splat(s);
  const r0 = cubic(p, u), r1 = cubic(p + 64, u), r2 = cubic(p + 128, u), r3 = cubic(p + 192, u);
  const q0 = slopeOf(p, u), q1 = slopeOf(p + 64, u), q2 = slopeOf(p + 128, u), q3 = slopeOf(p + 192, u);
  const three = f64x2.mul(f64x2.splat(3), r3);
  const two = f64x2.mul(f64x2.splat(2), r2);
  const byCrest = f64x2.mul(f64x2.add(f64x2.mul(f64x2.add(f64x2.mul(three, w), two), w), r1), f64x2.splat(perS));
  const value = f64x2.add(horner(r3, r2, r1, r0, w), f64x2.mul(byCrest, f64x2.splat(crest - inside)));
  const byPeak = f64x2.add(byCrest, f64x2.mul(horner(q3, q2, q1, q0, w), f64x2.splat(perT)));
  wr(L.RESULT, f64x2.extract_lane(value, 0));
  wr(L.RESULT + 1, f64x2.extract_lane(byCrest, 0));
  wr(L.RESULT + 2, f64x2.extract_lane(byPeak, 0));
  wr(L.RESULT + 3, f64x2.extract_lane(value, 1));
  wr(L.RESULT + 4, f64x2.extract_lane(byCrest, 1));
  wr(L.RESULT + 5, f64x2.extract_lane(byPeak, 1));
}

let knee: f64 = 1;
let kneeSlope: f64 = 0;
// @ts-expect-error: decorator
@inline function setKnee(p: f64): void {
  knee = 1;
  kneeSlope = 0;
  if (p < KNEE_DONE) {
    knee = p > 0 ? Math.tanh(p / KNEE_VOLTS) : 0;
    kneeSlope = p > 0 ? (1.0 - knee * knee) / KNEE_VOLTS : 0;
  }
}

// @ts-expect-error: decorator
@inline function pair(i: i32): v128 { return v128.load(i << 3); }
// @ts-expect-error: decorator
@inline function keep(i: i32, v: v128): void { v128.store(i << 3, v); }
// @ts-expect-error: decorator
@inline function size2(v: v128): f64 {
  const squares = f64x2.mul(v, v);
  return f64x2.extract_lane(squares, 0) + f64x2.extract_lane(squares, 1);
}
// real part of a·conj(b)
// @ts-expect-error: decorator
@inline function along(a: v128, b: v128): f64 {
  const product = f64x2.mul(a, b);
  return f64x2.extract_lane(product, 0) + f64x2.extract_lane(product, 1);
}

// the carrier path's determinant for chords g, k
// @ts-expect-error: decorator
@inline function determinant(g: f64, k: f64): v128 {
  const byG = f64x2.add(pair(L.PATH), f64x2.mul(f64x2.splat(k), pair(L.PATH + 4)));
  return f64x2.add(f64x2.add(f64x2(1.0, 0.0), f64x2.mul(f64x2.splat(g), byG)), f64x2.mul(f64x2.splat(k), pair(L.PATH + 2)));
}

// takes the chords of stage st along with its last move
// @ts-expect-error: decorator
@inline function moveChords(st: i32, dv: f64, dp: f64, dg: f64, du: f64): void {
  const o = L.CHORD_SLOPE + 5 * st;
  const c = L.CHORD + 2 * st;
  wr(c, rd(c) + rd(o) * dv + rd(o + 1) * dg);
  wr(c + 1, rd(c + 1) + rd(o + 2) * dv + rd(o + 3) * dp + rd(o + 4) * du);
}

// MOVE = inverse · (OPEN − W − Z·currents)
function portMoves(currents: i32): void {
  let r0 = f64x2.sub(pair(L.OPEN), pair(L.W));
  let r1 = f64x2.sub(pair(L.OPEN + 2), pair(L.W + 2));
  let r2 = f64x2.sub(pair(L.OPEN + 4), pair(L.W + 4));
  for (let c = 0; c < 6; c++) {
    const z = L.PORT_FROM_CURRENT + 6 * c;
    const i = f64x2.splat(rd(currents + c));
    r0 = f64x2.sub(r0, f64x2.mul(pair(z), i));
    r1 = f64x2.sub(r1, f64x2.mul(pair(z + 2), i));
    r2 = f64x2.sub(r2, f64x2.mul(pair(z + 4), i));
  }
  let d0 = f64x2.splat(0), d1 = f64x2.splat(0), d2 = f64x2.splat(0);
  const I = L.INVERSE;
  let r = f64x2.splat(f64x2.extract_lane(r0, 0));
  d0 = f64x2.mul(pair(I), r); d1 = f64x2.mul(pair(I + 2), r); d2 = f64x2.mul(pair(I + 4), r);
  r = f64x2.splat(f64x2.extract_lane(r0, 1));
  d0 = f64x2.add(d0, f64x2.mul(pair(I + 6), r)); d1 = f64x2.add(d1, f64x2.mul(pair(I + 8), r)); d2 = f64x2.add(d2, f64x2.mul(pair(I + 10), r));
  r = f64x2.splat(f64x2.extract_lane(r1, 0));
  d0 = f64x2.add(d0, f64x2.mul(pair(I + 12), r)); d1 = f64x2.add(d1, f64x2.mul(pair(I + 14), r)); d2 = f64x2.add(d2, f64x2.mul(pair(I + 16), r));
  r = f64x2.splat(f64x2.extract_lane(r1, 1));
  d0 = f64x2.add(d0, f64x2.mul(pair(I + 18), r)); d1 = f64x2.add(d1, f64x2.mul(pair(I + 20), r)); d2 = f64x2.add(d2, f64x2.mul(pair(I + 22), r));
  r = f64x2.splat(f64x2.extract_lane(r2, 0));
  d0 = f64x2.add(d0, f64x2.mul(pair(I + 24), r)); d1 = f64x2.add(d1, f64x2.mul(pair(I + 26), r)); d2 = f64x2.add(d2, f64x2.mul(pair(I + 28), r));
  r = f64x2.splat(f64x2.extract_lane(r2, 1));
  d0 = f64x2.add(d0, f64x2.mul(pair(I + 30), r)); d1 = f64x2.add(d1, f64x2.mul(pair(I + 32), r)); d2 = f64x2.add(d2, f64x2.mul(pair(I + 34), r));
  keep(L.MOVE, d0);
  keep(L.MOVE + 2, d1);
  keep(L.MOVE + 4, d2);
}

// one pass with kept slopes: 1 when it settled, 2 when it came nearer, 0 when the slopes are too old for it
function quickPass(): i32 {
  const perMu = rd(L.PER_MU);
  const phi = rd(L.PHI);
  const u1 = rd(L.W + 4) + rd(L.W + 5) * perMu;
  const stale = abs(rd(L.W + 4) - rd(L.KEPT)) + abs(u1 - rd(L.KEPT + 1)) + abs(rd(L.AG + 2) - rd(L.KEPT + 2)) + abs(rd(L.AU + 2) - rd(L.KEPT + 3));
  if (!(stale < rd(L.STALE))) return 0;
  for (let st = 0; st < 3; st++) {
    const v = rd(L.W + 2 * st);
    const p = rd(L.W + 1 + 2 * st);
    const e = rd(L.DRIVE + st);
    setKnee(p);
    const gridPeak = rd(L.AG + st);
    const tubePeak = rd(L.AU + st);
    const fromGrid = levels(L.GRID_TABLE, v, gridPeak);
    const fromTube = f64x2.mul(levels(L.TUBE_TABLE, v + p * perMu + phi, tubePeak), f64x2.splat(knee));
    const gm = f64x2.extract_lane(fromGrid, 0);
    const g = f64x2.extract_lane(fromGrid, 1);
    const km = f64x2.extract_lane(fromTube, 0);
    const k = f64x2.extract_lane(fromTube, 1);
    wr(L.CHORD + 2 * st, g);
    wr(L.CHORD + 1 + 2 * st, k);
    const d = determinant(g, k);
    const n = f64x2.add(pair(L.PATH + 6), f64x2.mul(f64x2.splat(k), pair(L.PATH + 8)));
    const u = f64x2.add(pair(L.PATH + 10), f64x2.mul(f64x2.splat(g), pair(L.PATH + 12)));
    const levelsNow = f64x2.mul(f64x2.sqrt(f64x2.mul(f64x2(size2(n), size2(u)), f64x2.splat(1.0 / size2(d)))), f64x2.splat(e));
    const fg = f64x2.extract_lane(levelsNow, 0) - gridPeak;
    const fu = f64x2.extract_lane(levelsNow, 1) - tubePeak;
    const b = L.BLEND + 6 * st;
    const g0 = rd(b) * fg + rd(b + 1) * fu;
    const u0 = rd(b + 2) * fg + rd(b + 3) * fu;
    const o = L.PEAKS + 6 * st;
    wr(o, g0);
    wr(o + 3, u0);
    const drawn = gm + rd(b + 4) * g0;
    wr(L.QUICK_CURRENT + 2 * st, drawn);
    wr(L.QUICK_CURRENT + 1 + 2 * st, km + rd(b + 5) * u0 - drawn);
  }
  portMoves(L.QUICK_CURRENT);
  let size: f64 = 0;
  for (let st = 0; st < 3; st++) {
    const dv = rd(L.MOVE + 2 * st), dp = rd(L.MOVE + 1 + 2 * st);
    const o = L.PEAKS + 6 * st;
    size += abs(dv) + abs(dp) * perMu + abs(rd(o) + rd(o + 1) * dv + rd(o + 2) * dp) + abs(rd(o + 3) + rd(o + 4) * dv + rd(o + 5) * dp);
  }
  const settled = size * (stale + size) < rd(L.QUICK);
  if (!settled && !(stale + size < rd(L.STALE))) return 0;
  for (let st = 0; st < 3; st++) {
    const dv = rd(L.MOVE + 2 * st), dp = rd(L.MOVE + 1 + 2 * st);
    const o = L.PEAKS + 6 * st;
    const dg = rd(o) + rd(o + 1) * dv + rd(o + 2) * dp;
    const du = rd(o + 3) + rd(o + 4) * dv + rd(o + 5) * dp;
    wr(L.W + 2 * st, rd(L.W + 2 * st) + dv);
    wr(L.W + 1 + 2 * st, rd(L.W + 1 + 2 * st) + dp);
    wr(L.AG + st, rd(L.AG + st) + dg);
    wr(L.AU + st, rd(L.AU + st) + du);
    const q = L.SLOPE + 4 * st;
    wr(L.CURRENT + 2 * st, rd(L.QUICK_CURRENT + 2 * st) + rd(q) * dv + rd(q + 1) * dp);
    wr(L.CURRENT + 1 + 2 * st, rd(L.QUICK_CURRENT + 1 + 2 * st) + rd(q + 2) * dv + rd(q + 3) * dp);
    moveChords(st, dv, dp, dg, du);
  }
  wr(L.COUNTS + 3, rd(L.COUNTS + 3) + 1);
  return settled ? 1 : 2;
}

// currents and slopes at stage st about the present estimate, the peaks eliminated
function linearise(st: i32): void {
  const perMu = rd(L.PER_MU);
  const v = rd(L.W + 2 * st);
  const p = rd(L.W + 1 + 2 * st);
  const e = rd(L.DRIVE + st);
  setKnee(p);
  const gridPeak = rd(L.AG + st);
  const tubePeak = rd(L.AU + st);
  full(L.GRID_TABLE, v, gridPeak);
  const gMean = rd(L.RESULT), gX = rd(L.RESULT + 1), gA = rd(L.RESULT + 2);
  const g = rd(L.RESULT + 3), cgx = rd(L.RESULT + 4), cga = rd(L.RESULT + 5);
  full(L.TUBE_TABLE, v + p * perMu + rd(L.PHI), tubePeak);
  const mean = rd(L.RESULT), kx = knee * rd(L.RESULT + 1), ka = knee * rd(L.RESULT + 2);
  const chordK = rd(L.RESULT + 3), ckx = knee * rd(L.RESULT + 4), cka = knee * rd(L.RESULT + 5);
  const k = knee * chordK;
  const d = determinant(g, k);
  const n = f64x2.add(pair(L.PATH + 6), f64x2.mul(f64x2.splat(k), pair(L.PATH + 8)));
  const u = f64x2.add(pair(L.PATH + 10), f64x2.mul(f64x2.splat(g), pair(L.PATH + 12)));
  const d2 = 1.0 / size2(d), n2 = size2(n), u2 = size2(u);
  const rg = sqrt(n2 * d2) * e;
  const ru = sqrt(u2 * d2) * e;
  const byG = along(f64x2.add(pair(L.PATH), f64x2.mul(f64x2.splat(k), pair(L.PATH + 4))), d) * d2;
  const byK = along(f64x2.add(pair(L.PATH + 2), f64x2.mul(f64x2.splat(g), pair(L.PATH + 4))), d) * d2;
  const ckp = ckx * perMu + kneeSlope * chordK;
  wr(L.CHORD + 2 * st, g);
  wr(L.CHORD + 1 + 2 * st, k);
  const cs = L.CHORD_SLOPE + 5 * st;
  wr(cs, cgx); wr(cs + 1, cga); wr(cs + 2, ckx); wr(cs + 3, ckp); wr(cs + 4, cka);
  const tgg = -rg * byG;
  const tgk = rg * ((n2 > 0 ? along(pair(L.PATH + 8), n) / n2 : 0.0) - byK);
  const tug = ru * ((u2 > 0 ? along(pair(L.PATH + 12), u) / u2 : 0.0) - byG);
  const tuk = -ru * byK;
  const m11 = 1.0 - tgg * cga, m12 = -tgk * cka, m21 = -tug * cga, m22 = 1.0 - tuk * cka;
  const inverse = 1.0 / (m11 * m22 - m12 * m21);
  const fg = rg - gridPeak, fu = ru - tubePeak;
  const bgv = tgg * cgx + tgk * ckx, buv = tug * cgx + tuk * ckx;
  const bgp = tgk * ckp, bup = tuk * ckp;
  const g0 = (m22 * fg - m12 * fu) * inverse, u0 = (m11 * fu - m21 * fg) * inverse;
  const gv = (m22 * bgv - m12 * buv) * inverse, uv = (m11 * buv - m21 * bgv) * inverse;
  const gp = (m22 * bgp - m12 * bup) * inverse, up = (m11 * bup - m21 * bgp) * inverse;
  const o = L.PEAKS + 6 * st;
  wr(o, g0); wr(o + 1, gv); wr(o + 2, gp); wr(o + 3, u0); wr(o + 4, uv); wr(o + 5, up);
  const b = L.BLEND + 6 * st;
  wr(b, m22 * inverse); wr(b + 1, -m12 * inverse); wr(b + 2, -m21 * inverse); wr(b + 3, m11 * inverse);
  wr(b + 4, gA); wr(b + 5, ka);
  const drawn = gMean + gA * g0;
  const byV = gX + gA * gv;
  const byP = gA * gp;
  wr(L.CURRENT + 2 * st, drawn);
  wr(L.CURRENT + 1 + 2 * st, knee * mean + ka * u0 - drawn);
  const q = L.SLOPE + 4 * st;
  wr(q, byV); wr(q + 1, byP);
  wr(q + 2, kx + ka * uv - byV);
  wr(q + 3, kx * perMu + kneeSlope * mean + ka * up - byP);
}

// the inverse of 1 + Z·J, column by column: the transposed matrix is built row by row and inverted where it stands;
// its diagonal leads, so no pivoting
function keepSlopes(perMu: f64): void {
  const m = L.INVERSE;
  for (let c = 0; c < 6; c++) {
    const st = c >> 1;
    const j0 = f64x2.splat(rd(L.SLOPE + 4 * st + (c & 1)));
    const j1 = f64x2.splat(rd(L.SLOPE + 4 * st + 2 + (c & 1)));
    const z = L.PORT_FROM_CURRENT + 12 * st;
    for (let q = 0; q < 6; q += 2) keep(m + 6 * c + q, f64x2.add(f64x2.mul(pair(z + q), j0), f64x2.mul(pair(z + 6 + q), j1)));
    wr(m + 7 * c, rd(m + 7 * c) + 1.0);
  }
  for (let k = 0; k < 6; k++) {
    const row = m + 6 * k;
    const p = f64x2.splat(1.0 / rd(row + k));
    wr(row + k, 1.0);
    const a = f64x2.mul(pair(row), p), b = f64x2.mul(pair(row + 2), p), c = f64x2.mul(pair(row + 4), p);
    keep(row, a); keep(row + 2, b); keep(row + 4, c);
    for (let r = 0; r < 6; r++) {
      if (r == k) continue;
      const other = m + 6 * r;
      const f = f64x2.splat(rd(other + k));
      wr(other + k, 0.0);
      keep(other, f64x2.sub(pair(other), f64x2.mul(f, a)));
      keep(other + 2, f64x2.sub(pair(other + 2), f64x2.mul(f, b)));
      keep(other + 4, f64x2.sub(pair(other + 4), f64x2.mul(f, c)));
    }
  }
  wr(L.KEPT, rd(L.W + 4));
  wr(L.KEPT + 1, rd(L.W + 4) + rd(L.W + 5) * perMu);
  wr(L.KEPT + 2, rd(L.AG + 2));
  wr(L.KEPT + 3, rd(L.AU + 2));
}

// a full pass: true when settled
function fullPass(pass: i32): bool {
  linearise(0);
  linearise(1);
  linearise(2);
  keepSlopes(rd(L.PER_MU));
  portMoves(L.CURRENT);
  const grid = max(max(abs(rd(L.MOVE)), abs(rd(L.MOVE + 2))), abs(rd(L.MOVE + 4)));
  const plate = max(max(abs(rd(L.MOVE + 1)), abs(rd(L.MOVE + 3))), abs(rd(L.MOVE + 5)));
  if (!(grid < 1e6) || !(plate < 1e9)) {
    for (let st = 0; st < 3; st++) {
      wr(L.W + 2 * st, rd(L.REST_GRID));
      wr(L.W + 1 + 2 * st, rd(L.REST_PLATE));
      wr(L.AG + st, 0);
      wr(L.AU + st, 0);
    }
    return false;
  }
  const near = grid < rd(L.GRID_MOVE) && plate < rd(L.PLATE_MOVE);
  let share: f64 = grid > rd(L.LONGEST_MOVE) ? rd(L.LONGEST_MOVE) / grid : 1.0;
  // the reasons for halving and for the plate's least share stand in the plain stepper
  if (pass > 12 && !near) share *= 0.5;
  let whole = share == 1.0;
  let largest: f64 = 0;
  for (let st = 0; st < 3; st++) {
    const dv = rd(L.MOVE + 2 * st);
    const dp = rd(L.MOVE + 1 + 2 * st);
    const o = L.PEAKS + 6 * st;
    const dg = rd(o) + rd(o + 1) * dv + rd(o + 2) * dp;
    const du = rd(o + 3) + rd(o + 4) * dv + rd(o + 5) * dp;
    const a = rd(L.AG + st), b = rd(L.AU + st);
    wr(L.W + 2 * st, rd(L.W + 2 * st) + share * dv);
    const p = rd(L.W + 1 + 2 * st);
    let next = p + share * dp;
    if (pass <= 12 && p > 0 && next < 0.1 * p) {
      next = 0.1 * p;
      whole = false;
    }
    wr(L.W + 1 + 2 * st, next);
    wr(L.AG + st, max(a + share * dg, 0.2 * a));
    wr(L.AU + st, max(b + share * du, 0.2 * b));
    const q = L.SLOPE + 4 * st;
    wr(L.CURRENT + 2 * st, rd(L.CURRENT + 2 * st) + rd(q) * dv + rd(q + 1) * dp);
    wr(L.CURRENT + 1 + 2 * st, rd(L.CURRENT + 1 + 2 * st) + rd(q + 2) * dv + rd(q + 3) * dp);
    moveChords(st, share * dv, share * dp, share * dg, share * du);
    largest = max(largest, max(abs(dg), abs(du)));
  }
  return whole && near && largest < rd(L.PEAK_MOVE);
}

// carries the last stage points on to the next three
function forecast(): void {
  const P = L.PAST;
  for (let st = 0; st < 3; st++) {
    const f = L.FORECAST + 4 * st;
    const w0 = rd(f), w1 = rd(f + 1), w2 = rd(f + 2), w3 = rd(f + 3);
    const e = rd(L.DRIVE + st);
    wr(L.W + 2 * st, w0 * rd(P) + w1 * rd(P + 1) + w2 * rd(P + 2) + w3 * rd(P + 3));
    wr(L.W + 1 + 2 * st, w0 * rd(P + 4) + w1 * rd(P + 5) + w2 * rd(P + 6) + w3 * rd(P + 7));
    const tg = w0 * rd(P + 8) + w1 * rd(P + 9) + w2 * rd(P + 10) + w3 * rd(P + 11);
    const tu = w0 * rd(P + 12) + w1 * rd(P + 13) + w2 * rd(P + 14) + w3 * rd(P + 15);
    wr(L.AG + st, (tg > 0 ? tg : rd(P + 8)) * e);
    wr(L.AU + st, (tu > 0 ? tu : rd(P + 12)) * e);
  }
}

function solve(): void {
  let quick = quickPass();
  for (let more = 0; more < 3 && quick == 2; more++) quick = quickPass();
  let settled = quick == 1;
  for (let pass = 0; pass < 60 && !settled; pass++) {
    wr(L.COUNTS, rd(L.COUNTS) + 1);
    settled = fullPass(pass);
  }
  if (!settled) wr(L.COUNTS + 1, rd(L.COUNTS + 1) + 1);
}

// the envelope at the three stages for the admittance in PULL: (1 + B·κ·ΔY)·E = ahead, three complex equations
function envelopeUnder(): void {
  const kappa = rd(L.TANK);
  const R = L.TANK_ROWS;
  for (let r = 0; r < 3; r++) {
    for (let c = 0; c < 3; c++) {
      const b = L.TANK_WEIGHTS + 6 * r + 2 * c;
      const yRe = kappa * rd(L.PULL + 2 * c), yIm = kappa * rd(L.PULL + 1 + 2 * c);
      const o = R + 8 * r + 2 * c;
      wr(o, rd(b) * yRe - rd(b + 1) * yIm + (r == c ? 1.0 : 0.0));
      wr(o + 1, rd(b) * yIm + rd(b + 1) * yRe);
    }
    wr(R + 8 * r + 6, rd(L.TANK_AHEAD + 2 * r));
    wr(R + 8 * r + 7, rd(L.TANK_AHEAD + 1 + 2 * r));
  }
  for (let k = 0; k < 2; k++) {
    const p = R + 10 * k;
    const scale = 1.0 / (rd(p) * rd(p) + rd(p + 1) * rd(p + 1));
    for (let r = k + 1; r < 3; r++) {
      const a = R + 8 * r + 2 * k;
      const fRe = (rd(a) * rd(p) + rd(a + 1) * rd(p + 1)) * scale;
      const fIm = (rd(a + 1) * rd(p) - rd(a) * rd(p + 1)) * scale;
      for (let c = k + 1; c < 4; c++) {
        const from = R + 8 * k + 2 * c, to = R + 8 * r + 2 * c;
        wr(to, rd(to) - fRe * rd(from) + fIm * rd(from + 1));
        wr(to + 1, rd(to + 1) - fRe * rd(from + 1) - fIm * rd(from));
      }
    }
  }
  for (let k = 2; k >= 0; k--) {
    let re = rd(R + 8 * k + 6), im = rd(R + 8 * k + 7);
    for (let c = k + 1; c < 3; c++) {
      const o = R + 8 * k + 2 * c, e = L.TANK_ENVELOPE + 2 * c;
      re -= rd(o) * rd(e) - rd(o + 1) * rd(e + 1);
      im -= rd(o) * rd(e + 1) + rd(o + 1) * rd(e);
    }
    const p = R + 10 * k;
    const scale = 1.0 / (rd(p) * rd(p) + rd(p + 1) * rd(p + 1));
    wr(L.TANK_ENVELOPE + 2 * k, (re * rd(p) + im * rd(p + 1)) * scale);
    wr(L.TANK_ENVELOPE + 1 + 2 * k, (im * rd(p) - re * rd(p + 1)) * scale);
  }
}

// a·b
// @ts-expect-error: decorator
@inline function times(a: v128, b: v128): v128 {
  const re = f64x2.extract_lane(a, 0), im = f64x2.extract_lane(a, 1);
  const bRe = f64x2.extract_lane(b, 0), bIm = f64x2.extract_lane(b, 1);
  return f64x2(re * bRe - im * bIm, re * bIm + im * bRe);
}
// a·conj(d)·scale
// @ts-expect-error: decorator
@inline function over(a: v128, d: v128, scale: f64): v128 {
  const re = f64x2.extract_lane(a, 0), im = f64x2.extract_lane(a, 1);
  const dRe = f64x2.extract_lane(d, 0), dIm = f64x2.extract_lane(d, 1);
  return f64x2((re * dRe + im * dIm) * scale, (im * dRe - re * dIm) * scale);
}
// g·a + k·b
// @ts-expect-error: decorator
@inline function blended(g: f64, a: v128, k: f64, b: v128): v128 {
  return f64x2.add(f64x2.mul(f64x2.splat(g), a), f64x2.mul(f64x2.splat(k), b));
}
// numerator of what the chords g, k add to the admittance
// @ts-expect-error: decorator
@inline function drawnBy(g: f64, k: f64): v128 {
  return f64x2.add(blended(g, pair(L.PATH + 14), k, pair(L.PATH + 16)), f64x2.mul(f64x2.splat(g * k), pair(L.PATH + 18)));
}

// what one volt more of carrier at stage c does at every stage
function respond(c: i32): void {
  const e = rd(L.DRIVE + c);
  const share: f64 = e > 0 ? 1.0 / e : 0.0;
  const tg = rd(L.AG + c) * share, tu = rd(L.AU + c) * share;
  const b = L.BLEND + 6 * c;
  const dg0 = rd(b) * tg + rd(b + 1) * tu, du0 = rd(b + 2) * tg + rd(b + 3) * tu;
  const grid = rd(b + 4) * dg0;
  const plate = rd(b + 5) * du0 - grid;
  const z = L.PORT_FROM_CURRENT + 12 * c;
  const i = f64x2.splat(grid), j = f64x2.splat(plate);
  let d0 = f64x2.splat(0), d1 = f64x2.splat(0), d2 = f64x2.splat(0);
  for (let q = 0; q < 6; q += 2) {
    const volts = f64x2.add(f64x2.mul(pair(z + q), i), f64x2.mul(pair(z + 6 + q), j));
    const one = L.INVERSE + 6 * q;
    const v = f64x2.splat(f64x2.extract_lane(volts, 0)), w = f64x2.splat(f64x2.extract_lane(volts, 1));
    d0 = f64x2.sub(d0, f64x2.add(f64x2.mul(pair(one), v), f64x2.mul(pair(one + 6), w)));
    d1 = f64x2.sub(d1, f64x2.add(f64x2.mul(pair(one + 2), v), f64x2.mul(pair(one + 8), w)));
    d2 = f64x2.sub(d2, f64x2.add(f64x2.mul(pair(one + 4), v), f64x2.mul(pair(one + 10), w)));
  }
  const V = L.BY_VOLTS + 6 * c;
  keep(V, d0);
  keep(V + 2, d1);
  keep(V + 4, d2);
  for (let st = 0; st < 3; st++) {
    const dv = rd(V + 2 * st), dp = rd(V + 2 * st + 1);
    const p = L.PEAKS + 6 * st, q = L.CHORD_SLOPE + 5 * st;
    const dg = (st == c ? dg0 : 0.0) + rd(p + 1) * dv + rd(p + 2) * dp;
    const du = (st == c ? du0 : 0.0) + rd(p + 4) * dv + rd(p + 5) * dp;
    wr(L.BY_PEAKS + 6 * c + 2 * st, dg);
    wr(L.BY_PEAKS + 6 * c + 2 * st + 1, du);
    const byG = rd(q) * dv + rd(q + 1) * dg;
    const byK = rd(q + 2) * dv + rd(q + 3) * dp + rd(q + 4) * du;
    const g = rd(L.CHORD + 2 * st), k = rd(L.CHORD + 1 + 2 * st);
    const gs = f64x2.splat(g), ks = f64x2.splat(k);
    const dBy = blended(byG, f64x2.add(pair(L.PATH), f64x2.mul(ks, pair(L.PATH + 4))), byK, f64x2.add(pair(L.PATH + 2), f64x2.mul(gs, pair(L.PATH + 4))));
    const qBy = blended(byG, f64x2.add(pair(L.PATH + 14), f64x2.mul(ks, pair(L.PATH + 18))), byK, f64x2.add(pair(L.PATH + 16), f64x2.mul(gs, pair(L.PATH + 18))));
    const d = determinant(g, k);
    const scale = 1.0 / size2(d);
    const y = over(drawnBy(g, k), d, scale);
    keep(L.BY_ADMITTANCE + 6 * c + 2 * st, over(f64x2.sub(qBy, times(y, dBy)), d, scale));
  }
}

// Newton on coil and stage; true when the envelope has hardly moved
function newton(): bool {
  for (let c = 0; c < 3; c++) respond(c);
  const kappa = rd(L.TANK), peak = rd(L.REST_PEAK);
  const R = L.NEWTON_ROWS;
  for (let st = 0; st < 3; st++) {
    const re = rd(L.TANK_ENVELOPE + 2 * st), im = rd(L.TANK_ENVELOPE + 1 + 2 * st);
    const size = sqrt(re * re + im * im);
    wr(L.ALONG + 2 * st, size > 0 ? re / size : 1.0);
    wr(L.ALONG + 1 + 2 * st, size > 0 ? im / size : 0.0);
  }
  for (let r = 0; r < 3; r++) {
    const o = R + 16 * r;
    let right = pair(L.TANK_AHEAD + 2 * r);
    for (let c = 0; c < 3; c++) {
      const b = f64x2.mul(pair(L.TANK_WEIGHTS + 6 * r + 2 * c), f64x2.splat(kappa));
      const a = f64x2.add(times(b, pair(L.PULL + 2 * c)), f64x2(r == c ? 1.0 : 0.0, 0.0));
      right = f64x2.sub(right, times(a, pair(L.TANK_ENVELOPE + 2 * c)));
      const re = f64x2.extract_lane(a, 0), im = f64x2.extract_lane(a, 1);
      wr(o + 2 * c, re);
      wr(o + 2 * c + 1, -im);
      wr(o + 8 + 2 * c, im);
      wr(o + 9 + 2 * c, re);
    }
    for (let d = 0; d < 3; d++) {
      let q = f64x2.splat(0);
      for (let c = 0; c < 3; c++) {
        q = f64x2.add(q, times(times(pair(L.TANK_WEIGHTS + 6 * r + 2 * c), pair(L.TANK_ENVELOPE + 2 * c)), pair(L.BY_ADMITTANCE + 6 * d + 2 * c)));
      }
      const along = f64x2.mul(pair(L.ALONG + 2 * d), f64x2.splat(kappa * peak));
      const at = o + 2 * d;
      keep(at, f64x2.add(pair(at), f64x2.mul(along, f64x2.splat(f64x2.extract_lane(q, 0)))));
      keep(at + 8, f64x2.add(pair(at + 8), f64x2.mul(along, f64x2.splat(f64x2.extract_lane(q, 1)))));
    }
    wr(o + 6, f64x2.extract_lane(right, 0));
    wr(o + 14, f64x2.extract_lane(right, 1));
  }
  for (let k = 0; k < 6; k++) {
    const p = R + 8 * k;
    const scale = 1.0 / rd(p + k);
    for (let r = k + 1; r < 6; r++) {
      const row = R + 8 * r;
      const factor = rd(row + k) * scale;
      for (let c = k + 1; c < 7; c++) wr(row + c, rd(row + c) - factor * rd(p + c));
    }
  }
  for (let k = 5; k >= 0; k--) {
    const row = R + 8 * k;
    let sum = rd(row + 6);
    for (let c = k + 1; c < 6; c++) sum -= rd(row + c) * rd(L.TANK_MOVE + c);
    wr(L.TANK_MOVE + k, sum / rd(row + k));
  }
  let largest: f64 = 0;
  for (let c = 0; c < 3; c++) {
    const re = rd(L.TANK_MOVE + 2 * c), im = rd(L.TANK_MOVE + 1 + 2 * c);
    largest = max(largest, abs(re) + abs(im));
    const e = L.TANK_ENVELOPE + 2 * c;
    wr(e, rd(e) + re);
    wr(e + 1, rd(e + 1) + im);
    const dv = f64x2.splat(peak * (rd(L.ALONG + 2 * c) * re + rd(L.ALONG + 1 + 2 * c) * im));
    for (let st = 0; st < 3; st++) {
      const o = 6 * c + 2 * st;
      keep(L.W + 2 * st, f64x2.add(pair(L.W + 2 * st), f64x2.mul(dv, pair(L.BY_VOLTS + o))));
      const peaks = f64x2.mul(dv, pair(L.BY_PEAKS + o));
      const a = rd(L.AG + st), b = rd(L.AU + st);
      wr(L.AG + st, max(a + f64x2.extract_lane(peaks, 0), 0.2 * a));
      wr(L.AU + st, max(b + f64x2.extract_lane(peaks, 1), 0.2 * b));
      keep(L.PULL + 2 * st, f64x2.add(pair(L.PULL + 2 * st), f64x2.mul(dv, pair(L.BY_ADMITTANCE + o))));
    }
  }
  return largest < rd(L.TANK + 4);
}

// stage and coil together; the reasons stand in the plain stepper
function solveWithTank(): void {
  const P = L.PULL_PAST;
  for (let st = 0; st < 3; st++) {
    const f = L.FORECAST + 4 * st;
    for (let part = 0; part < 2; part++) {
      const o = P + 4 * part;
      wr(L.PULL + 2 * st + part, rd(f) * rd(o) + rd(f + 1) * rd(o + 1) + rd(f + 2) * rd(o + 2) + rd(f + 3) * rd(o + 3));
    }
  }
  const peak = rd(L.REST_PEAK), restRe = rd(L.TANK + 1), restIm = rd(L.TANK + 2), most = rd(L.TANK + 3);
  envelopeUnder();
  let agreed = false;
  let bare = false;
  let last: f64 = Infinity;
  for (let round = 0; round < 16 && !agreed; round++) {
    for (let st = 0; st < 3; st++) {
      const before = rd(L.DRIVE + st);
      const re = rd(L.TANK_ENVELOPE + 2 * st), im = rd(L.TANK_ENVELOPE + 1 + 2 * st);
      const now = peak * sqrt(re * re + im * im);
      wr(L.DRIVE + st, now);
      if (bare && before > 0) {
        const share = now / before;
        wr(L.AG + st, rd(L.AG + st) * share);
        wr(L.AU + st, rd(L.AU + st) * share);
      }
    }
    if (round == 0) forecast();
    if (round > 2) wr(L.KEPT, Infinity);
    solve();
    let moved: f64 = 0;
    for (let st = 0; st < 3; st++) {
      const g = rd(L.CHORD + 2 * st), k = rd(L.CHORD + 1 + 2 * st);
      const d = determinant(g, k);
      const y = over(drawnBy(g, k), d, 1.0 / size2(d));
      const yRe = rd(L.PATH + 20) + f64x2.extract_lane(y, 0) - restRe;
      const yIm = rd(L.PATH + 21) + f64x2.extract_lane(y, 1) - restIm;
      moved = max(moved, (abs(yRe - rd(L.PULL + 2 * st)) + abs(yIm - rd(L.PULL + 1 + 2 * st))) * rd(L.DRIVE + st));
      wr(L.PULL + 2 * st, yRe);
      wr(L.PULL + 1 + 2 * st, yIm);
    }
    agreed = moved < most;
    if (agreed) break;
    if (moved > 0.05 * last) wr(L.STEEP, 1);
    last = moved;
    bare = rd(L.STEEP) == 0;
    if (bare) envelopeUnder();
    else agreed = newton();
  }
  if (!agreed) wr(L.COUNTS + 1, rd(L.COUNTS + 1) + 1);
  for (let part = 0; part < 2; part++) {
    const o = P + 4 * part;
    wr(o + 3, rd(o));
    wr(o + 2, rd(L.PULL + part));
    wr(o + 1, rd(L.PULL + 2 + part));
    wr(o, rd(L.PULL + 4 + part));
  }
  wr(L.ENVELOPE_STATE, rd(L.TANK_ENVELOPE + 4));
  wr(L.ENVELOPE_STATE + 1, rd(L.TANK_ENVELOPE + 5));
}

// one step; the output at half of it is the row after the unknowns in NEXT
function step(n: i32, rows: i32, tank: bool): void {
  wr(L.COUNTS + 2, rd(L.COUNTS + 2) + 1);
  let o0 = pair(L.PORT_CONSTANT), o1 = pair(L.PORT_CONSTANT + 2), o2 = pair(L.PORT_CONSTANT + 4);
  let at = L.PORT_FROM_STATE;
  for (let c = 0; c < n; c++) {
    const z = f64x2.splat(rd(L.STATE + c));
    o0 = f64x2.add(o0, f64x2.mul(pair(at), z));
    o1 = f64x2.add(o1, f64x2.mul(pair(at + 2), z));
    o2 = f64x2.add(o2, f64x2.mul(pair(at + 4), z));
    at += 6;
  }
  keep(L.OPEN, o0);
  keep(L.OPEN + 2, o1);
  keep(L.OPEN + 4, o2);
  if (tank) solveWithTank();
  else {
    forecast();
    solve();
  }
  for (let k = 0; k < 6; k++) wr(L.STATE + n + k, rd(L.CURRENT + k));
  const columns = n + 6;
  for (let r = 0; r < rows; r += 2) {
    let sum = pair(L.CONSTANT + r), other = f64x2.splat(0);
    let from = L.FROM_ALL + r;
    let c = 0;
    for (; c + 1 < columns; c += 2) {
      sum = f64x2.add(sum, f64x2.mul(pair(from), f64x2.splat(rd(L.STATE + c))));
      other = f64x2.add(other, f64x2.mul(pair(from + rows), f64x2.splat(rd(L.STATE + c + 1))));
      from += 2 * rows;
    }
    if (c < columns) sum = f64x2.add(sum, f64x2.mul(pair(from), f64x2.splat(rd(L.STATE + c))));
    keep(L.NEXT + r, f64x2.add(sum, other));
  }
  for (let r = 0; r < n; r++) wr(L.STATE + r, rd(L.NEXT + r));
  const P = L.PAST;
  for (let k = 0; k < 16; k += 4) wr(P + k + 3, rd(P + k));
  for (let st = 0; st < 3; st++) {
    const to = P + 2 - st;
    wr(to, rd(L.W + 2 * st));
    wr(to + 4, rd(L.W + 1 + 2 * st));
    const e = rd(L.DRIVE + st);
    if (e > 0) {
      wr(to + 8, rd(L.AG + st) / e);
      wr(to + 12, rd(L.AU + st) / e);
    }
  }
}

// the tuned circuit on the envelope for one step: E at the three stages, without what pulls it; leaves the carrier's
// peaks in DRIVE when nothing does
function envelope(first: f64, second: f64, end: f64, tuned: bool, tank: bool): void {
  const re = rd(L.ENVELOPE_STATE), im = rd(L.ENVELOPE_STATE + 1), last = rd(L.ENVELOPE_STATE + 2);
  const peak = rd(L.REST_PEAK);
  for (let row = 0; row < 3; row++) {
    const o = L.ENVELOPE + 10 * row;
    const drive = rd(o + 1) * last + rd(o + 2) * first + rd(o + 3) * second + rd(o + 4) * end;
    if (tuned && !tank) {
      const value = rd(o) * re + drive;
      wr(L.DRIVE + row, peak * abs(value));
      if (row == 2) wr(L.ENVELOPE_STATE, value);
      continue;
    }
    const driveIm = rd(o + 6) * last + rd(o + 7) * first + rd(o + 8) * second + rd(o + 9) * end;
    const nextRe = rd(o) * re - rd(o + 5) * im + drive;
    const nextIm = rd(o) * im + rd(o + 5) * re + driveIm;
    if (tank) {
      wr(L.TANK_AHEAD + 2 * row, nextRe);
      wr(L.TANK_AHEAD + 2 * row + 1, nextIm);
      continue;
    }
    wr(L.DRIVE + row, peak * sqrt(nextRe * nextRe + nextIm * nextIm));
    if (row == 2) {
      wr(L.ENVELOPE_STATE, nextRe);
      wr(L.ENVELOPE_STATE + 1, nextIm);
    }
  }
  wr(L.ENVELOPE_STATE + 2, end);
}

// the same for a station's envelope of two parts
function envelopeOfTwo(window: i32, quadrature: i32, phases: i32, taps: i32, half: i32, k: i32, last: bool, tank: bool): void {
  const re = rd(L.ENVELOPE_STATE), im = rd(L.ENVELOPE_STATE + 1);
  const peak = rd(L.REST_PEAK);
  let sRe0 = rd(L.ENVELOPE_STATE + 2), sIm0 = rd(L.ENVELOPE_STATE + 3);
  const row0 = phases + ((3 * k * taps) << 3), row1 = row0 + (taps << 3), row2 = row1 + (taps << 3);
  const sRe1 = 1.0 + product(row0, window, taps), sIm1 = product(row0, quadrature, taps);
  const sRe2 = 1.0 + product(row1, window, taps), sIm2 = product(row1, quadrature, taps);
  const sRe3 = 1.0 + (last ? load<f64>(window + (half << 3)) : product(row2, window, taps));
  const sIm3 = last ? load<f64>(quadrature + (half << 3)) : product(row2, quadrature, taps);
  for (let row = 0; row < 3; row++) {
    const o = L.ENVELOPE + 10 * row;
    const a0 = rd(o + 1), a1 = rd(o + 2), a2 = rd(o + 3), a3 = rd(o + 4);
    const b0 = rd(o + 6), b1 = rd(o + 7), b2 = rd(o + 8), b3 = rd(o + 9);
    const nextRe = rd(o) * re - rd(o + 5) * im + a0 * sRe0 - b0 * sIm0 + a1 * sRe1 - b1 * sIm1 + a2 * sRe2 - b2 * sIm2 + a3 * sRe3 - b3 * sIm3;
    const nextIm = rd(o) * im + rd(o + 5) * re + a0 * sIm0 + b0 * sRe0 + a1 * sIm1 + b1 * sRe1 + a2 * sIm2 + b2 * sRe2 + a3 * sIm3 + b3 * sRe3;
    if (tank) {
      wr(L.TANK_AHEAD + 2 * row, nextRe);
      wr(L.TANK_AHEAD + 2 * row + 1, nextIm);
      continue;
    }
    wr(L.DRIVE + row, peak * sqrt(nextRe * nextRe + nextIm * nextIm));
    if (row == 2) {
      wr(L.ENVELOPE_STATE, nextRe);
      wr(L.ENVELOPE_STATE + 1, nextIm);
    }
  }
  wr(L.ENVELOPE_STATE + 2, sRe3);
  wr(L.ENVELOPE_STATE + 3, sIm3);
}

// sum of products of two runs of `taps` (even) f64
// @ts-expect-error: decorator
@inline function product(a: i32, b: i32, taps: i32): f64 {
  let one = f64x2.splat(0), two = f64x2.splat(0), three = f64x2.splat(0);
  const stop = a + (taps << 3);
  for (; a + 48 <= stop; a += 48) {
    one = f64x2.add(one, f64x2.mul(v128.load(a), v128.load(b)));
    two = f64x2.add(two, f64x2.mul(v128.load(a, 16), v128.load(b, 16)));
    three = f64x2.add(three, f64x2.mul(v128.load(a, 32), v128.load(b, 32)));
    b += 48;
  }
  for (; a < stop; a += 16) {
    one = f64x2.add(one, f64x2.mul(v128.load(a), v128.load(b)));
    b += 16;
  }
  const sum = f64x2.add(f64x2.add(one, two), three);
  return f64x2.extract_lane(sum, 0) + f64x2.extract_lane(sum, 1);
}

/**
 * Renders `frames` clip samples from INPUT to OUTPUT.
 *
 * n: unknowns; rows: of the state's matrix; output: index of the unknown that is heard; steps to a clip sample; half: kernel
 * half length in samples; phases, lanes: byte addresses of the filters' weights; rise, fall: byte addresses of the
 * windows (see kernel.ts); at: place in the windows; middle: weight of the clip instant; quadrature: byte address of the
 * window of the envelope's second part, 0 for none.
 */
export function block(
  frames: i32, n: i32, rows: i32, output: i32, steps: i32, half: i32, phases: i32, lanes: i32, rise: i32, fall: i32, at: i32, tuned: bool, middle: f64, quadrature: i32,
): i32 {
  const taps = 2 * half;
  const long = 2 * taps * 8;
  let riseAt = at & 0xffff;
  let fallAt = riseAt;
  let instantAt = at >> 16;
  const weight = rd(L.WEIGHT), restVolts = rd(L.REST_OUTPUT);
  const tank = rd(L.TANK + 5) > 0;
  const count = 2 * steps - 1;
  for (let f = 0; f < frames; f++) {
    const sample = rd(L.INPUT + f);
    store<f64>(rise + (riseAt << 3), sample);
    store<f64>(rise + ((riseAt + taps) << 3), sample);
    if (quadrature > 0) {
      const other = rd(L.QUADRATURE + f);
      store<f64>(quadrature + (riseAt << 3), other);
      store<f64>(quadrature + ((riseAt + taps) << 3), other);
    }
    riseAt = riseAt + 1 == taps ? 0 : riseAt + 1;
    const window = rise + (riseAt << 3);
    for (let k = 0; k < steps; k++) {
      const last = k == steps - 1;
      if (quadrature > 0) envelopeOfTwo(window, quadrature + (riseAt << 3), phases, taps, half, k, last, tank);
      else {
        const first = product(phases + ((3 * k * taps) << 3), window, taps);
        const second = product(phases + (((3 * k + 1) * taps) << 3), window, taps);
        // the last instant of a sample falls on the clip's own: every other tap is zero
        const end = last ? load<f64>(window + (half << 3)) : product(phases + (((3 * k + 2) * taps) << 3), window, taps);
        envelope(1.0 + first, 1.0 + second, 1.0 + end, tuned, tank);
      }
      step(n, rows, tank);
      const middleVolts = rd(L.NEXT + n) * weight - restVolts;
      const lane = fall + 2 * k * long;
      store<f64>(lane + (fallAt << 3), middleVolts);
      store<f64>(lane + ((fallAt + taps) << 3), middleVolts);
      const volts = rd(L.STATE + output) * weight - restVolts;
      const next = lane + long;
      if (last) {
        store<f64>(next + (instantAt << 3), volts);
        store<f64>(next + ((instantAt + half + 1) << 3), volts);
        instantAt = instantAt == half ? 0 : instantAt + 1;
      } else {
        store<f64>(next + (fallAt << 3), volts);
        store<f64>(next + ((fallAt + taps) << 3), volts);
      }
    }
    fallAt = fallAt + 1 == taps ? 0 : fallAt + 1;
    let sum = middle * load<f64>(fall + count * long + (instantAt << 3));
    for (let lane = 0; lane < count; lane++) sum += product(lanes + ((lane * taps) << 3), fall + lane * long + (fallAt << 3), taps);
    wr(L.OUTPUT + f, sum);
  }
  return riseAt | (instantAt << 16);
}
