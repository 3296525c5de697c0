import { describe, expect, it } from 'vitest';
import type { DetectorCircuit, PlateLoad } from '../../src/engine/circuits/circuit.ts';
import { magnitude } from '../../src/engine/circuits/complex.ts';
import { costByPart } from '../../src/engine/circuits/cost-by-part.ts';
import { LinearResponse, type ModulationResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { gridLeak } from './grid-leak-circuit.ts';
import { choke, loaded, phones, transformer } from './loaded-circuits.ts';

// Rules of the trade: common practice, no source. Only orders and the spans that are stated are checked.

const decibels = (ratio: number): number => 20 * Math.log10(ratio);
const MEDIUM_MU = ['76', '27', '6SN7-GT', '12AU7', '30', '01-A'] as const;

/** Output at 1 kHz a unit of modulation, dB re 1 V. */
function loudness(circuit: DetectorCircuit): number {
  return decibels(magnitude(new LinearResponse(restPoint(circuit)).at(1000).output));
}

describe('medium-mu tubes on 45 to 90 V, stiff source', () => {
  const cases = MEDIUM_MU.flatMap((tube) => [45, 67.5, 90].map((supplyVolts) => [tube, supplyVolts] as const));
  const set = (tube: string, supplyVolts: number, load: PlateLoad): DetectorCircuit =>
    loaded(gridLeak({ tube, supplyVolts }), load);

  it.each(cases)('%s at %d V: a 1:3 transformer is louder than 56 kΩ by 8 to 20 dB', (tube, supplyVolts) => {
    const resistor = loudness(set(tube, supplyVolts, { kind: 'resistor', ohms: 56e3 }));
    for (const name of ['good 1:3', 'plain 1:3'] as const) {
      const more = loudness(set(tube, supplyVolts, transformer(name))) - resistor;
      const said = `${name}: ${more.toFixed(1)} dB over 56 kΩ`;
      expect(more, said).toBeGreaterThan(8);
      expect(more, said).toBeLessThan(20);
    }
  });

  it.each(cases)('%s at %d V: a choke is louder than 56 kΩ, and a transformer than a choke', (tube, supplyVolts) => {
    const levels = [{ kind: 'resistor', ohms: 56e3 } as const, choke('large'), transformer('good 1:3')].map((load) =>
      loudness(set(tube, supplyVolts, load)),
    );
    const said = levels.map((level) => `${level.toFixed(1)} dB`).join(', ');
    expect(levels, said).toEqual([...levels].sort((a, b) => a - b));
  });
});

describe('bypass and plate resistor', () => {
  /** What the bypass costs at 5 kHz, dB. */
  const cost = (tube: string, plateOhms: number, bypassFarads: number): number =>
    costByPart(restPoint(gridLeak({ tube, plateOhms, bypassFarads })), [5000]).plateBypass[0]!;

  // right: what costs 1 dB at 5 kHz, about the least that is noticed; too much: more than 2 dB
  it.each(['6SL7-GT', '12AX7', '6F5', '6SN7-GT', '76', '27'])(
    '%s: a bypass that is right for 22 kΩ is too much for 120 kΩ',
    (tube) => {
      let [less, more] = [100e-12, 10e-9];
      for (let halving = 0; halving < 40; halving++) {
        const farads = Math.sqrt(less * more);
        if (cost(tube, 22e3, farads) < 1) less = farads;
        else more = farads;
      }
      const figures = [22e3, 56e3, 120e3].map((ohms) => cost(tube, ohms, less));
      const said = `${(less * 1e12).toFixed(0)} pF: ${figures.map((figure) => `${figure.toFixed(1)} dB`).join(', ')}`;
      expect(figures[0], said).toBeCloseTo(1, 3);
      expect(figures[2], said).toBeGreaterThan(2);
      expect(figures, said).toEqual([...figures].sort((a, b) => a - b));
    },
  );
});

describe('phones in the plate lead of a tube of low plate resistance', () => {
  /** Rise from 400 Hz to 5 kHz of one signal over that at the grid, dB. */
  function rise(circuit: DetectorCircuit, signal: (at: ModulationResponse) => number): number {
    const response = new LinearResponse(restPoint(circuit));
    const [treble, middle] = [response.at(5000), response.at(400)];
    return decibels(signal(treble) / magnitude(treble.grid) / (signal(middle) / magnitude(middle.grid)));
  }

  // 3 and 6 dB: half of what the catalogue's phones do at the least, so that the orders do not hang on a hair
  it.each(['76', '6SN7-GT', '12AU7', '30'])('%s: the voltage across rises at 5 kHz, what is heard falls', (tube) => {
    const circuit = loaded(gridLeak({ tube, bypassFarads: 0 }), phones('2000 ohm'));
    const across = rise(circuit, (at) => magnitude(at.plate));
    const heard = rise(circuit, (at) => magnitude(at.output));
    const said = `across ${across.toFixed(1)} dB, heard ${heard.toFixed(1)} dB`;
    expect(across, said).toBeGreaterThan(3);
    expect(heard, said).toBeLessThan(-6);
  });
});
