import type { DiodeLaw } from '../circuits/circuit.ts';
import type { RestPoint } from '../circuits/rest-point.ts';
import type { StageLaws } from '../circuits/stage-currents.ts';
import { portLaws } from '../circuits/stage-laws.ts';
import { type CycleTable, cycleTable } from '../tubes/cycle-table.ts';
import type { SmoothLaw } from '../tubes/smooth-law.ts';

/** Stage laws whose grid and cathode are tables, which the kernel takes. */
export interface TableLaws extends StageLaws {
  readonly grid: CycleTable;
  readonly cathode: CycleTable;
}

/** Kept tables of one run, so that variants of one tube share them. */
export class TableStore {
  private readonly kept = new Map<string, CycleTable>();

  /**
   * The averaged laws of a circuit as tables, wide enough for its carrier at full modulation.
   *
   * @param rest        the circuit at rest
   * @param modulation  largest modulation depth it will see, 0 and up
   */
  lawsFor(rest: RestPoint, modulation: number): StageLaws | TableLaws {
    if (rest.circuit.detector.law !== 'tube') return rest.laws;
    const law = rest.circuit.tube.law;
    const { grid, cathode } = portLaws(rest.circuit);
    const { carrierPeakVolts, tank } = rest.tuned;
    // behind a coil a plate that runs out of volts at a crest lets go of it, up to the level with no detector at all
    const open = tank === null ? 0 : Math.SQRT2 * rest.circuit.station.levelVoltsRms;
    const carrier = widen(1.1 * Math.max(carrierPeakVolts, open) * (1 + modulation));
    const cathodeTop = Math.max(2, law.phi) + rest.circuit.plate.supplyVolts / law.mu + 2 * carrier + 2;
    const { diode } = rest.circuit.detector;
    const gridName = diode ? `diode ${JSON.stringify(diode.law)}` : `grid ${law.Gg} ${law.Cg} ${law.xi}`;
    if (diode) {
      const top = Math.min(diodeTop(diode.law), Math.max(LEAST_DIODE_TOP, 4 * carrier));
      const idle = this.table('idle', cathode, 1, 1);
      return { ...rest.laws, grid: this.table(gridName, grid, top, carrier), cathode: idle };
    }
    return {
      ...rest.laws,
      grid: this.table(gridName, grid, 3 + 0.5 * carrier, carrier),
      cathode: this.table(`cathode ${law.G} ${law.C} ${law.gamma}`, cathode, widen(cathodeTop), carrier),
    };
  }

  private table(name: string, law: SmoothLaw, topVolts: number, topCarrier: number): CycleTable {
    const key = `${name} ${topVolts} ${topCarrier}`;
    const found = this.kept.get(key);
    if (found) return found;
    const made = cycleTable(law, topVolts, topCarrier);
    this.kept.set(key, made);
    return made;
  }
}

/** A poor diode's table is cut at four times the carrier's crest, and not below this, V: past it, its last slope goes on. */
const LEAST_DIODE_TOP = 32;

/** Crest that a diode's table reaches, V: where it carries more than any detector's load asks for at a crest. */
function diodeTop(law: DiodeLaw): number {
  const amps = 0.05;
  if (law.kind === '3/2') return (amps / law.perveance) ** (2 / 3) + 1;
  return law.idealityVolts * Math.log1p(amps / law.saturationAmps) + amps * law.seriesOhms;
}

/** Rounds a voltage up to a step of a third of an octave, so that near variants share a table. */
function widen(volts: number): number {
  return 2 ** (Math.ceil(3 * Math.log2(Math.max(volts, 0.02))) / 3);
}
