import { formatQuantity } from '../../engine/parts/format-quantity.ts';
import type { VariantResult } from '../../results/result.ts';
import { SOCKET_NOTE, socketTable } from '../../results/socket-table.ts';
import { element, section, table } from './dom.ts';

const volts = (value: number): string => formatQuantity(value, 'voltage', 3);
const percent = (value: number): string => `${Number(value.toPrecision(3))} %`;

/** Socket voltages as a service sheet gives them, then what the signal does there. */
export class WorkingPointSection {
  readonly root: HTMLElement;
  private readonly tables = element('div', {});
  private variants: readonly VariantResult[] = [];

  constructor() {
    this.root = section('working-point', 'Working point', element('p', {}, SOCKET_NOTE), this.tables);
  }

  refresh(variants: readonly VariantResult[]): void {
    if (variants === this.variants) return;
    this.variants = variants;
    const heads = variants.map(({ name }) => name);
    this.tables.replaceChildren(
      table('Socket voltages', ['electrode', ...heads], [...socketTable(variants), ...currentRows(variants)]),
      table('Tube and signal', ['quantity', ...heads], signalRows(variants)),
      table('Distortion of the modulation, percent of the fundamental', ['signal', ...heads], distortionRows(variants)),
      table(
        'Sensitivity: audio at 400 Hz and 30 % modulation, second harmonic',
        ['carrier', ...heads],
        sensitivityRows(variants),
      ),
    );
  }
}

function currentRows(variants: readonly VariantResult[]): string[][] {
  const milliamperes = (amps: number): string => `${(amps * 1000).toPrecision(3)} mA`;
  return [
    ['plate current', ...variants.map(({ rest }) => milliamperes(rest.plateAmps))],
    ['grid current', ...variants.map(({ rest }) => milliamperes(rest.gridAmps))],
    ['supply current', ...variants.map(({ rest }) => milliamperes(rest.supplyAmps))],
  ];
}

function signalRows(variants: readonly VariantResult[]): string[][] {
  const row = (label: string, text: (variant: VariantResult) => string): string[] => [label, ...variants.map(text)];
  return [
    row('amplification factor', ({ rest }) => rest.amplificationFactor.toPrecision(3)),
    row('plate resistance', ({ rest }) => formatQuantity(rest.plateResistanceOhms, 'resistance', 3)),
    row('transconductance', ({ rest }) => `${(rest.transconductanceSiemens * 1e6).toPrecision(3)} µS`),
    row('stage gain at 400 Hz', ({ rest }) => rest.stageGain.toPrecision(3)),
    row('plate dissipation', ({ rest }) => formatQuantity(rest.plateWatts, 'power', 3)),
    row('loaded Q', ({ circuit }) => circuit.tunedCircuit.loadedQ.toFixed(0)),
    row('carrier at the grid, rms', ({ rest }) => volts(rest.carrierAtGridVoltsRms)),
    row('carrier left on the plate, rms', ({ rest }) => volts(rest.carrierOnPlateVoltsRms)),
    row('3 dB down, low', ({ lowCornerHertz }) => corner(lowCornerHertz)),
    row('3 dB down, high', ({ highCornerHertz }) => corner(highCornerHertz)),
  ];
}

function corner(hertz: number | null): string {
  return hertz === null ? '–' : formatQuantity(hertz, 'frequency', 3);
}

function distortionRows(variants: readonly VariantResult[]): string[][] {
  return (variants[0]?.distortion ?? []).flatMap(({ hertz, modulationPercent }) =>
    (['secondPercent', 'thirdPercent', 'totalPercent'] as const).map((kind) => [
      `${hertz} Hz at ${modulationPercent.toFixed(0)} %, ${kind.replace('Percent', '')}`,
      ...variants.map((variant) => {
        const found = variant.distortion.find(
          (one) => one.hertz === hertz && one.modulationPercent === modulationPercent,
        );
        return found ? percent(found[kind]) : '–';
      }),
    ]),
  );
}

function sensitivityRows(variants: readonly VariantResult[]): string[][] {
  return (variants[0]?.sensitivity ?? []).map(({ levelVoltsRms }) => [
    volts(levelVoltsRms),
    ...variants.map((variant) => {
      const found = variant.sensitivity.find((one) => one.levelVoltsRms === levelVoltsRms);
      return found ? `${volts(found.audioVoltsRmsAt30Percent)}, ${percent(found.secondPercent)}` : '–';
    }),
  ]);
}
