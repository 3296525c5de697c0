import { InputError } from '../engine/errors.ts';
import type { HearingCurve } from '../engine/hearing/hearing-curves.ts';
import { HEARING_CURVES } from '../engine/hearing/hearing-curves.ts';
import { TableStore } from '../engine/renderer/table-store.ts';
import { preEmphasise } from '../engine/station/pre-emphasis.ts';
import { type Programme, programmeFrom } from '../engine/station/programme.ts';
import type { BuiltCircuit } from '../list/build-circuit.ts';
import { circuitOfLayers } from '../list/plain-layers.ts';
import type { ToWorker, WantedCircuit } from './messages.ts';

export type Opening = Extract<ToWorker, { kind: 'open' }>;

/** A circuit with what the clip becomes on its way to it. */
export interface Prepared extends BuiltCircuit {
  readonly programme: Programme;
  readonly heard: HearingCurve;
}

/** What a page's circuits share: the clip, the list, and what was worked out once. */
export class Workshop {
  readonly opening: Opening;
  readonly tables = new TableStore();
  private readonly programmes = new Map<string, Programme>();

  constructor(opening: Opening) {
    this.opening = opening;
  }

  /** Reads a circuit and sends the clip through its station. Throws InputError. */
  prepare(wanted: WantedCircuit): Prepared {
    const built = this.circuit(wanted);
    const heard = [...this.opening.curves, ...HEARING_CURVES].find(({ name }) => sameName(name, built.heardThrough));
    if (!heard) {
      throw new InputError({
        code: 'unknown-hearing',
        where: 'output.heard through',
        got: built.heardThrough,
        expected: `one of ${[...HEARING_CURVES, ...this.opening.curves].map(({ name }) => name).join(', ')}`,
      });
    }
    return { ...built, heard, programme: this.programme(built) };
  }

  circuit(wanted: WantedCircuit): BuiltCircuit {
    return circuitOfLayers([this.opening.base, ...wanted.layers]);
  }

  /** The clip as the circuit's station sends it, by the same steps as the command. */
  private programme({ sending, circuit }: BuiltCircuit): Programme {
    const { preEmphasis, channelLimit, side } = sending;
    const depth = circuit.station.modulation;
    const key = `${preEmphasis} ${channelLimit} ${side} ${depth}`;
    const kept = this.programmes.get(key);
    if (kept) return kept;
    const mono = this.opening.sides[side] ?? this.opening.sides.both ?? Object.values(this.opening.sides)[0];
    const shaped = preEmphasise(mono ?? new Float64Array(0), this.opening.sampleRateHertz, preEmphasis, channelLimit);
    const made = programmeFrom(shaped, depth);
    this.programmes.set(key, made);
    return made;
  }
}

function sameName(a: string, b: string): boolean {
  return a.toLowerCase() === b.toLowerCase();
}
