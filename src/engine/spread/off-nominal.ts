import type { DetectorCircuit } from '../circuits/circuit.ts';
import type { VariedPart } from './varied-parts.ts';

/**
 * A part's nominal value in a circuit, base SI units; null where the circuit has no such part, or holds a value of one
 * that it does not use. A tube's is 1: its current and slope are taken together as a factor on those of its law.
 */
export function nominalValue(circuit: DetectorCircuit, part: VariedPart): number | null {
  const value = numberAt(circuit, part.paths[0]);
  if (value === null || !(value > 0) || !part.kinds.includes(circuit.detector.kind)) return null;
  if (part.key === 'plate.bypass' && isDecoupled(circuit)) return null;
  if (part.key === 'detector.filter capacitor' && circuit.detector.diode?.filterOhms === null) return null;
  if (part.key === 'detector.tube') return 1;
  const { law } = circuit.tube;
  if (part.family === 'grid current') return law.Gg * (Math.LN2 / law.Cg) ** law.xi;
  return part.power === 1 ? value : 1 / ((2 * Math.PI * circuit.station.carrierHertz) ** 2 * value);
}

/** A follower with a dropping resistor has that one's capacitor for its plate bypass. */
function isDecoupled({ detector, plate }: DetectorCircuit): boolean {
  return detector.kind === 'infinite impedance' && (plate.dropping ?? null) !== null;
}

/** The circuit with each part at its factor times the nominal value. */
export function withFactors(
  circuit: DetectorCircuit,
  parts: readonly VariedPart[],
  factors: ArrayLike<number>,
): DetectorCircuit {
  return parts.reduce((changed, { paths, power }, k) => {
    const factor = factors[k] as number;
    return paths.reduce((one, path) => scaledAt(one, path.split('.'), power === 1 ? factor : 1 / factor), changed);
  }, circuit);
}

/** A copy with one number scaled; as it was where there is no number at that path. */
function scaledAt<Held>(held: Held, path: readonly string[], factor: number): Held {
  const [first, ...rest] = path;
  if (first === undefined) return (typeof held === 'number' ? held * factor : held) as Held;
  if (typeof held !== 'object' || held === null || !(first in held)) return held;
  return { ...held, [first]: scaledAt(memberOf(held, first), rest, factor) };
}

function numberAt(held: unknown, path: string): number | null {
  const value = path.split('.').reduce<unknown>(memberOf, held);
  return typeof value === 'number' ? value : null;
}

function memberOf(held: unknown, key: string): unknown {
  return typeof held === 'object' && held !== null ? Reflect.get(held, key) : undefined;
}
