/**
 * Where the kernel's numbers stand in its memory, as f64 indices (the address is 8 times that). The kernel and the
 * code that loads it read this one file. Everything that is read two at a time stands on an even index.
 */

/** Largest network the kernel takes, unknowns. */
export const MOST_UNKNOWNS = 24;
/** Rows of the state's matrix: the unknowns and the output at half a step, rounded up to an even number. */
export const MOST_ROWS = MOST_UNKNOWNS + 2;
/** Largest block, clip samples. */
export const BLOCK = 2048;
/** Past points that a forecast is drawn from. */
export const PAST_POINTS = 4;

// tube: 1/mu, phi, carrier's rest peak, output rest volts, output weight
export const PER_MU = 1;
export const PHI = 2;
export const REST_PEAK = 3;
export const REST_OUTPUT = 4;
export const WEIGHT = 5;
// limits: staleness, quick product, grid, plate and peak moves, longest grid move; rest volts
export const STALE = 6;
export const QUICK = 7;
export const GRID_MOVE = 8;
export const PLATE_MOVE = 9;
export const PEAK_MOVE = 10;
export const LONGEST_MOVE = 11;
export const REST_GRID = 12;
export const REST_PLATE = 13;
/** The carrier path's eleven complex numbers. */
export const PATH = 14;
// two tables' heads: lowest, highest, widest, crest cells per volt, peak cells per volt, last crest cell, peak cells,
// then byte addresses of crest knots, inverse widths, index, peak knots, inverse widths, index, cells
export const GRID_TABLE = 36;
export const TUBE_TABLE = 52;
/** Forecast weights, a stage after another. */
export const FORECAST = 68;
/** Port constants, and ports from currents column by column. */
export const PORT_CONSTANT = 80;
export const PORT_FROM_CURRENT = 86;
// envelope: weights a stage after another (five, real then imaginary), state: E and the last instant's value, two parts each
export const ENVELOPE = 122;
export const ENVELOPE_STATE = 152;
// working: three stages of drive, volts, peaks, port volts with no current, currents, quick currents, slopes by column,
// moves of the peaks, blends, inverse by column, where slopes were kept, past points of four quantities, results of a table
export const DRIVE = 156;
export const W = 160;
export const AG = 166;
export const AU = 169;
export const OPEN = 172;
export const CURRENT = 178;
export const QUICK_CURRENT = 184;
export const MOVE = 190;
export const SLOPE = 196;
export const PEAKS = 208;
export const BLEND = 226;
export const INVERSE = 244;
export const KEPT = 280;
export const PAST = 284;
export const RESULT = 300;
/** Counts: passes, unsettled, steps, quick. */
export const COUNTS = 306;
// coil as built: chords 6, their slopes 5 a stage; κ, rest admittance, admittance's move that ends the rounds, the envelope's, whether there is one;
// weights of the pull 18, envelope without it 6, with it 6, admittance less that at rest 6 and its past points
export const CHORD = 310;
export const CHORD_SLOPE = 316;
export const TANK = 332;
export const TANK_WEIGHTS = 338;
export const TANK_AHEAD = 356;
export const TANK_ENVELOPE = 362;
export const PULL = 368;
export const PULL_PAST = 374;
/** Scratch for the coil's three complex equations, rows of four complex numbers. */
export const TANK_ROWS = 382;
// Newton on coil and stage: for a volt more at each stage the moves of port volts, peaks and admittance, 6 numbers each,
// direction of the envelope at each stage, its move, six real equations in rows of eight
export const BY_VOLTS = 408;
export const BY_PEAKS = 426;
export const BY_ADMITTANCE = 444;
export const ALONG = 462;
export const TANK_MOVE = 468;
export const NEWTON_ROWS = 474;
/** 1 once bare rounds of stage and coil have been met that gain little. */
export const STEEP = 522;
// network: state followed by currents, next state, constants; matrices column by column: ports from state 6 × n, next
// state with the output at half a step from state and currents
export const STATE = 524;
export const NEXT = STATE + MOST_UNKNOWNS + 6;
export const CONSTANT = NEXT + MOST_ROWS;
export const PORT_FROM_STATE = CONSTANT + MOST_ROWS;
export const FROM_ALL = PORT_FROM_STATE + 6 * MOST_UNKNOWNS;
/** Clip-rate buffers: modulation in, volts out. */
export const INPUT = FROM_ALL + MOST_ROWS * (MOST_UNKNOWNS + 6);
/** The second part of the station's envelope, where it has one. */
export const QUADRATURE = INPUT + BLOCK;
export const OUTPUT = QUADRATURE + BLOCK;
/** First free f64: drives, step outputs, filters, then the tables. */
export const FREE = OUTPUT + BLOCK;
