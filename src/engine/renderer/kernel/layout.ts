/**
 * Where the kernel's numbers stand in its memory, as f64 indices (the address is 8 times that). The kernel and the
 * code that loads it read this one file.
 */

/** Largest network the kernel takes, unknowns. */
export const MOST_UNKNOWNS = 24;
/** Largest block, clip samples. */
export const BLOCK = 2048;

// tube: 1/mu, phi, carrier's rest peak, output rest volts, output weight, and the carrier path's twelve numbers
export const PER_MU = 1;
export const PHI = 2;
export const REST_PEAK = 3;
export const REST_OUTPUT = 4;
export const WEIGHT = 5;
export const PATH = 8;
// limits: staleness, quick product, grid, plate and peak moves, longest grid move
export const STALE = 20;
export const QUICK = 21;
export const GRID_MOVE = 22;
export const PLATE_MOVE = 23;
export const PEAK_MOVE = 24;
export const LONGEST_MOVE = 25;
export const REST_GRID = 26;
export const REST_PLATE = 27;
// two tables' heads: lowest, highest, widest, crest cells per volt, peak cells per volt, last crest cell, peak cells,
// then byte addresses of crest knots, inverse widths, index, peak knots, inverse widths, index, cells
export const GRID_TABLE = 32;
export const TUBE_TABLE = 48;
// forecast weights 8, port constants 4, ports from currents 16
export const FORECAST = 64;
export const PORT_CONSTANT = 72;
export const PORT_FROM_CURRENT = 76;
// envelope: weights 16, state 3
export const ENVELOPE = 96;
export const ENVELOPE_STATE = 112;
// working: drive 2, w 4, ag 2, au 2, open 4, i0 4, slopes 8, peaks 12, blend 12, inverse 16, kept 4, past 16
export const DRIVE = 120;
export const W = 124;
export const AG = 128;
export const AU = 130;
export const OPEN = 132;
export const CURRENT = 136;
export const QUICK_CURRENT = 140;
export const SLOPE = 144;
export const PEAKS = 152;
export const BLEND = 164;
export const INVERSE = 176;
export const SQUARE = 192;
export const KEPT = 208;
export const PAST = 212;
export const RESULT = 228;
export const AUGMENTED = 240;
/** Counts: passes, unsettled, steps, quick. */
export const COUNTS = 262;
// coil as built: chords 4, their slopes 5 a stage; κ, rest admittance 2, reach and share of the envelope, whether there is one;
// weights of the pull 8, envelope without it 4, pull 4, its past 8, envelope with it 4
export const CHORD = 272;
export const CHORD_SLOPE = 276;
export const TANK = 286;
export const TANK_WEIGHTS = 292;
export const TANK_AHEAD = 300;
export const TANK_ENVELOPE = 304;
export const PULL = 308;
export const PULL_PAST = 312;
// network: state, next state, constants, then n × n, n × 4 and 4 × n matrices
export const STATE = 320;
export const NEXT = STATE + MOST_UNKNOWNS;
export const CONSTANT = NEXT + MOST_UNKNOWNS;
export const FROM_STATE = CONSTANT + MOST_UNKNOWNS;
export const FROM_CURRENT = FROM_STATE + MOST_UNKNOWNS * MOST_UNKNOWNS;
export const PORT_FROM_STATE = FROM_CURRENT + 4 * MOST_UNKNOWNS;
/** Clip-rate buffers: modulation in, volts out. */
export const INPUT = PORT_FROM_STATE + 4 * MOST_UNKNOWNS;
export const OUTPUT = INPUT + BLOCK;
/** First free f64: drives, step outputs, filters, then the tables. */
export const FREE = OUTPUT + BLOCK;
