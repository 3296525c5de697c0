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

// mean and chord at a point
// @ts-expect-error: decorator
@inline function levels(h: i32, x: f64, a: f64): v128 {
  const crest = x + a;
  if (!(crest > rd(h))) return f64x2.splat(0);
  if (!(crest < rd(h + 1))) {
    full(h, x, a);
    return f64x2(rd(L.RESULT), rd(L.RESULT + 3));
  }
  const p = cell(h, crest, min(a, rd(h + 2)));
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
  const p = cell(h, inside, min(a, rd(h + 2)));
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

// takes the chords of stage st along with its last move
// @ts-expect-error: decorator
@inline function moveChords(st: i32, dv: f64, dp: f64, dg: f64, du: f64): void {
  const o = L.CHORD_SLOPE + 5 * st;
  const c = L.CHORD + 2 * st;
  wr(c, rd(c) + rd(o) * dv + rd(o + 1) * dg);
  wr(c + 1, rd(c + 1) + rd(o + 2) * dv + rd(o + 3) * dp + rd(o + 4) * du);
}

// one pass with kept slopes; true when it settled
function quickPass(): bool {
  const perMu = rd(L.PER_MU);
  const phi = rd(L.PHI);
  const u1 = rd(L.W + 2) + rd(L.W + 3) * perMu;
  const stale = abs(rd(L.W + 2) - rd(L.KEPT)) + abs(u1 - rd(L.KEPT + 1)) + abs(rd(L.AG + 1) - rd(L.KEPT + 2)) + abs(rd(L.AU + 1) - rd(L.KEPT + 3));
  if (!(stale < rd(L.STALE))) return false;
  for (let st = 0; st < 2; st++) {
    const v = rd(L.W + 2 * st);
    const p = rd(L.W + 1 + 2 * st);
    const e = rd(L.DRIVE + st);
    setKnee(p);
    const gridPeak = rd(L.AG + st);
    const tubePeak = rd(L.AU + st);
    const fromGrid = levels(L.GRID_TABLE, v, gridPeak);
    const fromTube = levels(L.TUBE_TABLE, v + p * perMu + phi, tubePeak);
    const gm = f64x2.extract_lane(fromGrid, 0);
    const g = f64x2.extract_lane(fromGrid, 1);
    const km = knee * f64x2.extract_lane(fromTube, 0);
    const k = knee * f64x2.extract_lane(fromTube, 1);
    wr(L.CHORD + 2 * st, g);
    wr(L.CHORD + 1 + 2 * st, k);
    const gpRe = rd(L.PATH + 3), gpIm = rd(L.PATH + 4);
    const alphaRe = rd(L.PATH + 1) + g, alphaIm = rd(L.PATH + 2);
    const betaRe = rd(L.PATH + 5) + k * perMu, betaIm = rd(L.PATH + 6);
    const etaRe = rd(L.PATH + 7) + g * perMu, etaIm = rd(L.PATH + 8);
    const gammaRe = k - g - gpRe;
    const detRe = alphaRe * betaRe - alphaIm * betaIm + gpRe * gammaRe + gpIm * gpIm;
    const detIm = alphaRe * betaIm + alphaIm * betaRe - gpRe * gpIm + gpIm * gammaRe;
    const scale = rd(L.PATH + 9) / sqrt(detRe * detRe + detIm * detIm);
    const fg = scale * sqrt(betaRe * betaRe + betaIm * betaIm) * e - gridPeak;
    const fu = scale * sqrt(etaRe * etaRe + etaIm * etaIm) * e - tubePeak;
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
  const c0 = rd(L.QUICK_CURRENT), c1 = rd(L.QUICK_CURRENT + 1), c2 = rd(L.QUICK_CURRENT + 2), c3 = rd(L.QUICK_CURRENT + 3);
  const Z = L.PORT_FROM_CURRENT;
  const r0 = rd(L.OPEN) - rd(L.W) - rd(Z) * c0 - rd(Z + 1) * c1 - rd(Z + 2) * c2 - rd(Z + 3) * c3;
  const r1 = rd(L.OPEN + 1) - rd(L.W + 1) - rd(Z + 4) * c0 - rd(Z + 5) * c1 - rd(Z + 6) * c2 - rd(Z + 7) * c3;
  const r2 = rd(L.OPEN + 2) - rd(L.W + 2) - rd(Z + 8) * c0 - rd(Z + 9) * c1 - rd(Z + 10) * c2 - rd(Z + 11) * c3;
  const r3 = rd(L.OPEN + 3) - rd(L.W + 3) - rd(Z + 12) * c0 - rd(Z + 13) * c1 - rd(Z + 14) * c2 - rd(Z + 15) * c3;
  const I = L.INVERSE;
  const d0 = rd(I) * r0 + rd(I + 1) * r1 + rd(I + 2) * r2 + rd(I + 3) * r3;
  const d1 = rd(I + 4) * r0 + rd(I + 5) * r1 + rd(I + 6) * r2 + rd(I + 7) * r3;
  const d2 = rd(I + 8) * r0 + rd(I + 9) * r1 + rd(I + 10) * r2 + rd(I + 11) * r3;
  const d3 = rd(I + 12) * r0 + rd(I + 13) * r1 + rd(I + 14) * r2 + rd(I + 15) * r3;
  const P = L.PEAKS;
  const dg0 = rd(P) + rd(P + 1) * d0 + rd(P + 2) * d1;
  const du0 = rd(P + 3) + rd(P + 4) * d0 + rd(P + 5) * d1;
  const dg1 = rd(P + 6) + rd(P + 7) * d2 + rd(P + 8) * d3;
  const du1 = rd(P + 9) + rd(P + 10) * d2 + rd(P + 11) * d3;
  const size = abs(d0) + abs(d2) + (abs(d1) + abs(d3)) * perMu + abs(dg0) + abs(dg1) + abs(du0) + abs(du1);
  if (!(size * (stale + size) < rd(L.QUICK))) return false;
  wr(L.W, rd(L.W) + d0);
  wr(L.W + 1, rd(L.W + 1) + d1);
  wr(L.W + 2, rd(L.W + 2) + d2);
  wr(L.W + 3, rd(L.W + 3) + d3);
  wr(L.AG, rd(L.AG) + dg0);
  wr(L.AG + 1, rd(L.AG + 1) + dg1);
  wr(L.AU, rd(L.AU) + du0);
  wr(L.AU + 1, rd(L.AU + 1) + du1);
  const S = L.SLOPE;
  wr(L.CURRENT, c0 + rd(S) * d0 + rd(S + 1) * d1);
  wr(L.CURRENT + 1, c1 + rd(S + 2) * d0 + rd(S + 3) * d1);
  wr(L.CURRENT + 2, c2 + rd(S + 4) * d2 + rd(S + 5) * d3);
  wr(L.CURRENT + 3, c3 + rd(S + 6) * d2 + rd(S + 7) * d3);
  moveChords(0, d0, d1, dg0, du0);
  moveChords(1, d2, d3, dg1, du1);
  wr(L.COUNTS + 3, rd(L.COUNTS + 3) + 1);
  return true;
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
  const gpRe = rd(L.PATH + 3), gpIm = rd(L.PATH + 4);
  const alphaRe = rd(L.PATH + 1) + g, alphaIm = rd(L.PATH + 2);
  const betaRe = rd(L.PATH + 5) + k * perMu, betaIm = rd(L.PATH + 6);
  const etaRe = rd(L.PATH + 7) + g * perMu, etaIm = rd(L.PATH + 8);
  const gammaRe = k - g - gpRe;
  const detRe = alphaRe * betaRe - alphaIm * betaIm + gpRe * gammaRe + gpIm * gpIm;
  const detIm = alphaRe * betaIm + alphaIm * betaRe - gpRe * gpIm + gpIm * gammaRe;
  const det2 = 1.0 / (detRe * detRe + detIm * detIm);
  const beta2 = betaRe * betaRe + betaIm * betaIm;
  const eta2 = etaRe * etaRe + etaIm * etaIm;
  const rg = rd(L.PATH + 9) * sqrt(beta2 * det2) * e;
  const ru = rd(L.PATH + 9) * sqrt(eta2 * det2) * e;
  const byG = ((betaRe - gpRe) * detRe + (betaIm - gpIm) * detIm) * det2;
  const byK = ((alphaRe * perMu + gpRe) * detRe + (alphaIm * perMu + gpIm) * detIm) * det2;
  const ckp = ckx * perMu + kneeSlope * chordK;
  wr(L.CHORD + 2 * st, g);
  wr(L.CHORD + 1 + 2 * st, k);
  const cs = L.CHORD_SLOPE + 5 * st;
  wr(cs, cgx); wr(cs + 1, cga); wr(cs + 2, ckx); wr(cs + 3, ckp); wr(cs + 4, cka);
  const tgg = -rg * byG;
  const tgk = rg * ((betaRe * perMu) / beta2 - byK);
  const tug = ru * ((etaRe * perMu) / eta2 - byG);
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

// the port equations' matrix 1 + Z·J at row-major `to` with the given row length
function portMatrix(to: i32, width: i32): void {
  const S = L.SLOPE;
  for (let r = 0; r < 4; r++) {
    const z = L.PORT_FROM_CURRENT + 4 * r;
    const o = to + width * r;
    wr(o, rd(z) * rd(S) + rd(z + 1) * rd(S + 2));
    wr(o + 1, rd(z) * rd(S + 1) + rd(z + 1) * rd(S + 3));
    wr(o + 2, rd(z + 2) * rd(S + 4) + rd(z + 3) * rd(S + 6));
    wr(o + 3, rd(z + 2) * rd(S + 5) + rd(z + 3) * rd(S + 7));
    wr(o + r, rd(o + r) + 1.0);
  }
}

function keepSlopes(perMu: f64): void {
  portMatrix(L.SQUARE, 4);
  const m = L.SQUARE, out = L.INVERSE;
  for (let k = 0; k < 16; k++) wr(out + k, k % 5 == 0 ? 1.0 : 0.0);
  for (let c = 0; c < 4; c++) {
    const scale = 1.0 / rd(m + 5 * c);
    for (let q = 0; q < 4; q++) {
      wr(m + 4 * c + q, rd(m + 4 * c + q) * scale);
      wr(out + 4 * c + q, rd(out + 4 * c + q) * scale);
    }
    for (let r = 0; r < 4; r++) {
      if (r == c) continue;
      const f = rd(m + 4 * r + c);
      for (let q = 0; q < 4; q++) {
        wr(m + 4 * r + q, rd(m + 4 * r + q) - f * rd(m + 4 * c + q));
        wr(out + 4 * r + q, rd(out + 4 * r + q) - f * rd(out + 4 * c + q));
      }
    }
  }
  wr(L.KEPT, rd(L.W + 2));
  wr(L.KEPT + 1, rd(L.W + 2) + rd(L.W + 3) * perMu);
  wr(L.KEPT + 2, rd(L.AG + 1));
  wr(L.KEPT + 3, rd(L.AU + 1));
}

// a full pass: true when settled
function fullPass(pass: i32): bool {
  linearise(0);
  linearise(1);
  keepSlopes(rd(L.PER_MU));
  const Z = L.PORT_FROM_CURRENT;
  const c0 = rd(L.CURRENT), c1 = rd(L.CURRENT + 1), c2 = rd(L.CURRENT + 2), c3 = rd(L.CURRENT + 3);
  const r0 = rd(L.OPEN) - rd(L.W) - rd(Z) * c0 - rd(Z + 1) * c1 - rd(Z + 2) * c2 - rd(Z + 3) * c3;
  const r1 = rd(L.OPEN + 1) - rd(L.W + 1) - rd(Z + 4) * c0 - rd(Z + 5) * c1 - rd(Z + 6) * c2 - rd(Z + 7) * c3;
  const r2 = rd(L.OPEN + 2) - rd(L.W + 2) - rd(Z + 8) * c0 - rd(Z + 9) * c1 - rd(Z + 10) * c2 - rd(Z + 11) * c3;
  const r3 = rd(L.OPEN + 3) - rd(L.W + 3) - rd(Z + 12) * c0 - rd(Z + 13) * c1 - rd(Z + 14) * c2 - rd(Z + 15) * c3;
  const I = L.INVERSE;
  const d0 = rd(I) * r0 + rd(I + 1) * r1 + rd(I + 2) * r2 + rd(I + 3) * r3;
  const d1 = rd(I + 4) * r0 + rd(I + 5) * r1 + rd(I + 6) * r2 + rd(I + 7) * r3;
  const d2 = rd(I + 8) * r0 + rd(I + 9) * r1 + rd(I + 10) * r2 + rd(I + 11) * r3;
  const d3 = rd(I + 12) * r0 + rd(I + 13) * r1 + rd(I + 14) * r2 + rd(I + 15) * r3;
  const grid = max(abs(d0), abs(d2));
  const plate = max(abs(d1), abs(d3));
  if (!(grid < 1e6) || !(plate < 1e9)) {
    wr(L.W, rd(L.REST_GRID)); wr(L.W + 1, rd(L.REST_PLATE));
    wr(L.W + 2, rd(L.REST_GRID)); wr(L.W + 3, rd(L.REST_PLATE));
    return false;
  }
  const near = grid < rd(L.GRID_MOVE) && plate < rd(L.PLATE_MOVE);
  let share: f64 = grid > rd(L.LONGEST_MOVE) ? rd(L.LONGEST_MOVE) / grid : 1.0;
  // the reasons for halving and for the plate's least share stand in the plain stepper
  if (pass > 12 && !near) share *= 0.5;
  let whole = share == 1.0;
  let largest: f64 = 0;
  for (let st = 0; st < 2; st++) {
    const dv = st == 0 ? d0 : d2;
    const dp = st == 0 ? d1 : d3;
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

// carries the last four stage points on to the next two
function forecast(): void {
  const P = L.PAST;
  for (let st = 0; st < 2; st++) {
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
  let settled = quickPass();
  for (let pass = 0; pass < 60 && !settled; pass++) {
    wr(L.COUNTS, rd(L.COUNTS) + 1);
    settled = fullPass(pass);
  }
  if (!settled) wr(L.COUNTS + 1, rd(L.COUNTS + 1) + 1);
}

// envelope at stage st under the pull, to TANK_ENVELOPE
// @ts-expect-error: decorator
@inline function underPull(st: i32): void {
  const o = L.TANK_WEIGHTS + 4 * st;
  const r1 = rd(o), i1 = rd(o + 1), r2 = rd(o + 2), i2 = rd(o + 3);
  const p0 = rd(L.PULL), p1 = rd(L.PULL + 1), p2 = rd(L.PULL + 2), p3 = rd(L.PULL + 3);
  const a = L.TANK_AHEAD + 2 * st;
  const e = L.TANK_ENVELOPE + 2 * st;
  wr(e, rd(a) + r1 * p0 - i1 * p1 + r2 * p2 - i2 * p3);
  wr(e + 1, rd(a + 1) + r1 * p1 + i1 * p0 + r2 * p3 + i2 * p2);
}

// stage and coil together; the reasons stand in the plain stepper
function solveWithTank(): void {
  const P = L.PULL_PAST;
  for (let st = 0; st < 2; st++) {
    const f = L.FORECAST + 4 * st;
    for (let part = 0; part < 2; part++) {
      const o = P + 4 * part;
      wr(L.PULL + 2 * st + part, rd(f) * rd(o) + rd(f + 1) * rd(o + 1) + rd(f + 2) * rd(o + 2) + rd(f + 3) * rd(o + 3));
    }
  }
  const peak = rd(L.REST_PEAK), kappa = rd(L.TANK), restRe = rd(L.TANK + 1), restIm = rd(L.TANK + 2);
  const most = rd(L.TANK + 4) / rd(L.TANK + 3);
  for (let round = 0; round < 12; round++) {
    for (let st = 0; st < 2; st++) {
      const before = rd(L.DRIVE + st);
      underPull(st);
      const re = rd(L.TANK_ENVELOPE + 2 * st), im = rd(L.TANK_ENVELOPE + 1 + 2 * st);
      const now = peak * sqrt(re * re + im * im);
      wr(L.DRIVE + st, now);
      if (round > 0 && before > 0) {
        const share = now / before;
        wr(L.AG + st, rd(L.AG + st) * share);
        wr(L.AU + st, rd(L.AU + st) * share);
      }
    }
    if (round == 0) forecast();
    solve();
    let moved: f64 = 0;
    for (let st = 0; st < 2; st++) {
      const g = rd(L.CHORD + 2 * st), k = rd(L.CHORD + 1 + 2 * st);
      const perMu = rd(L.PATH);
      const gpRe = rd(L.PATH + 3), gpIm = rd(L.PATH + 4);
      const alphaRe = rd(L.PATH + 1) + g, alphaIm = rd(L.PATH + 2);
      const betaRe = rd(L.PATH + 5) + k * perMu, betaIm = rd(L.PATH + 6);
      const gammaRe = k - g - gpRe;
      const detRe = alphaRe * betaRe - alphaIm * betaIm + gpRe * gammaRe + gpIm * gpIm;
      const detIm = alphaRe * betaIm + alphaIm * betaRe - gpRe * gpIm + gpIm * gammaRe;
      const sRe = rd(L.PATH + 10), sIm = rd(L.PATH + 11);
      const bRe = sRe * betaRe - sIm * betaIm, bIm = sRe * betaIm + sIm * betaRe;
      const scale = 1.0 / (detRe * detRe + detIm * detIm);
      const leftRe = 1.0 - (bRe * detRe + bIm * detIm) * scale;
      const leftIm = -(bIm * detRe - bRe * detIm) * scale;
      const yRe = kappa * (sRe * leftRe - sIm * leftIm - restRe);
      const yIm = kappa * (sRe * leftIm + sIm * leftRe - restIm);
      const re = rd(L.TANK_ENVELOPE + 2 * st), im = rd(L.TANK_ENVELOPE + 1 + 2 * st);
      const nRe = yIm * im - yRe * re;
      const nIm = -yRe * im - yIm * re;
      moved += abs(nRe - rd(L.PULL + 2 * st)) + abs(nIm - rd(L.PULL + 1 + 2 * st));
      wr(L.PULL + 2 * st, nRe);
      wr(L.PULL + 1 + 2 * st, nIm);
    }
    if (moved < most) break;
  }
  underPull(1);
  for (let part = 0; part < 2; part++) {
    const o = P + 4 * part;
    wr(o + 3, rd(o + 1));
    wr(o + 2, rd(o));
    wr(o + 1, rd(L.PULL + part));
    wr(o, rd(L.PULL + 2 + part));
  }
  wr(L.ENVELOPE_STATE, rd(L.TANK_ENVELOPE + 2));
  wr(L.ENVELOPE_STATE + 1, rd(L.TANK_ENVELOPE + 3));
}

function step(n: i32, tank: bool): void {
  wr(L.COUNTS + 2, rd(L.COUNTS + 2) + 1);
  for (let r = 0; r < 4; r++) {
    let sum = rd(L.PORT_CONSTANT + r);
    const o = L.PORT_FROM_STATE + r * n;
    for (let c = 0; c < n; c++) sum += rd(o + c) * rd(L.STATE + c);
    wr(L.OPEN + r, sum);
  }
  if (tank) solveWithTank();
  else {
    forecast();
    solve();
  }
  const e0 = rd(L.DRIVE), e1 = rd(L.DRIVE + 1);
  const P = L.PAST;
  const i0 = rd(L.CURRENT), i1 = rd(L.CURRENT + 1), i2 = rd(L.CURRENT + 2), i3 = rd(L.CURRENT + 3);
  for (let r = 0; r < n; r++) {
    let sum = rd(L.CONSTANT + r);
    const o = L.FROM_STATE + r * n;
    for (let c = 0; c < n; c++) sum += rd(o + c) * rd(L.STATE + c);
    const q = L.FROM_CURRENT + 4 * r;
    wr(L.NEXT + r, sum - rd(q) * i0 - rd(q + 1) * i1 - rd(q + 2) * i2 - rd(q + 3) * i3);
  }
  for (let r = 0; r < n; r++) wr(L.STATE + r, rd(L.NEXT + r));
  for (let k = 0; k < 16; k += 4) {
    wr(P + k + 3, rd(P + k + 1));
    wr(P + k + 2, rd(P + k));
  }
  wr(P + 1, rd(L.W));
  wr(P + 5, rd(L.W + 1));
  wr(P, rd(L.W + 2));
  wr(P + 4, rd(L.W + 3));
  if (e0 > 0) {
    wr(P + 9, rd(L.AG) / e0);
    wr(P + 13, rd(L.AU) / e0);
  }
  if (e1 > 0) {
    wr(P + 8, rd(L.AG + 1) / e1);
    wr(P + 12, rd(L.AU + 1) / e1);
  }
}

// the tuned circuit on the envelope for one step; leaves the carrier's peaks in DRIVE
function envelope(third: f64, end: f64, tuned: bool): void {
  const re = rd(L.ENVELOPE_STATE), im = rd(L.ENVELOPE_STATE + 1), last = rd(L.ENVELOPE_STATE + 2);
  const peak = rd(L.REST_PEAK);
  for (let row = 0; row < 2; row++) {
    const o = L.ENVELOPE + 8 * row;
    const drive = rd(o + 1) * last + rd(o + 2) * third + rd(o + 3) * end;
    if (tuned) {
      const value = rd(o) * re + drive;
      wr(L.DRIVE + row, peak * abs(value));
      if (row == 1) wr(L.ENVELOPE_STATE, value);
    } else {
      const driveIm = rd(o + 5) * last + rd(o + 6) * third + rd(o + 7) * end;
      const nextRe = rd(o) * re - rd(o + 4) * im + drive;
      const nextIm = rd(o) * im + rd(o + 4) * re + driveIm;
      wr(L.DRIVE + row, peak * sqrt(nextRe * nextRe + nextIm * nextIm));
      if (row == 1) {
        wr(L.ENVELOPE_STATE, nextRe);
        wr(L.ENVELOPE_STATE + 1, nextIm);
      }
    }
  }
  wr(L.ENVELOPE_STATE + 2, end);
}

// the same, left open for the detector's pull
function envelopeAhead(third: f64, end: f64): void {
  const re = rd(L.ENVELOPE_STATE), im = rd(L.ENVELOPE_STATE + 1), last = rd(L.ENVELOPE_STATE + 2);
  for (let row = 0; row < 2; row++) {
    const o = L.ENVELOPE + 8 * row;
    const drive = rd(o + 1) * last + rd(o + 2) * third + rd(o + 3) * end;
    const driveIm = rd(o + 5) * last + rd(o + 6) * third + rd(o + 7) * end;
    wr(L.TANK_AHEAD + 2 * row, rd(o) * re - rd(o + 4) * im + drive);
    wr(L.TANK_AHEAD + 2 * row + 1, rd(o) * im + rd(o + 4) * re + driveIm);
  }
  wr(L.ENVELOPE_STATE + 2, end);
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
 * n: unknowns; output: index of the unknown that is heard; steps to a clip sample; half: kernel half length in samples;
 * phases, rows: byte addresses of the filters' weights; rise, fall: byte addresses of the windows (see kernel.ts);
 * at: place in the windows; middle: weight of the clip instant.
 */
export function block(
  frames: i32, n: i32, output: i32, steps: i32, half: i32, phases: i32, rows: i32, rise: i32, fall: i32, at: i32, tuned: bool, middle: f64,
): i32 {
  const taps = 2 * half;
  const long = 2 * taps * 8;
  let riseAt = at & 0xffff;
  let fallAt = riseAt;
  let instantAt = at >> 16;
  const weight = rd(L.WEIGHT), restVolts = rd(L.REST_OUTPUT);
  const tank = rd(L.TANK + 5) > 0;
  for (let f = 0; f < frames; f++) {
    const sample = rd(L.INPUT + f);
    store<f64>(rise + (riseAt << 3), sample);
    store<f64>(rise + ((riseAt + taps) << 3), sample);
    riseAt = riseAt + 1 == taps ? 0 : riseAt + 1;
    const window = rise + (riseAt << 3);
    for (let k = 0; k < steps; k++) {
      const last = k == steps - 1;
      const third = product(phases + ((2 * k * taps) << 3), window, taps);
      // the last instant of a sample falls on the clip's own: every other tap is zero
      const end = last ? load<f64>(window + (half << 3)) : product(phases + (((2 * k + 1) * taps) << 3), window, taps);
      if (tank) envelopeAhead(1.0 + third, 1.0 + end);
      else envelope(1.0 + third, 1.0 + end, tuned);
      step(n, tank);
      const volts = rd(L.STATE + output) * weight - restVolts;
      const lane = fall + k * long;
      if (last) {
        store<f64>(lane + (instantAt << 3), volts);
        store<f64>(lane + ((instantAt + half + 1) << 3), volts);
        instantAt = instantAt == half ? 0 : instantAt + 1;
      } else {
        store<f64>(lane + (fallAt << 3), volts);
        store<f64>(lane + ((fallAt + taps) << 3), volts);
      }
    }
    fallAt = fallAt + 1 == taps ? 0 : fallAt + 1;
    let sum = middle * load<f64>(fall + (steps - 1) * long + (instantAt << 3));
    for (let row = 0; row < steps - 1; row++) sum += product(rows + ((row * taps) << 3), fall + row * long + (fallAt << 3), taps);
    wr(L.OUTPUT + f, sum);
  }
  return riseAt | (instantAt << 16);
}
