import { manualPage, type PublishedRow, picofarads, publishedRow, type TubeType } from './tube-type.ts';

const ECC83_NOTES = 'Sylvania sheet as quoted at https://en-wikipedia--on--ipfs-org.ipns.dweb.link/wiki/12AX7';
const OP316 = 'http://op316.com/tubes/datalib/pax7.htm';

const ROW_12AX7: readonly PublishedRow[] = [
  publishedRow(100, -1, 0.5, 100, 1250, 80000, manualPage('12AX7'), 'from memory, cross-checked'),
  publishedRow(250, -2, 1.2, 100, 1600, 62500, ECC83_NOTES, 'seen'),
];

const ROW_6F5: readonly PublishedRow[] = [
  publishedRow(100, -1, 0.4, 100, 1150, 85000, manualPage('6F5'), 'from memory'),
  publishedRow(250, -2, 0.9, 100, 1500, 66000, manualPage('6F5'), 'from memory, cross-checked'),
];

const HEATER_6V = { volts: 6.3, amps: 0.3 } as const;

/** Heater triodes of high amplification factor. */
export const HIGH_MU_TUBES: readonly TubeType[] = [
  {
    name: '6SL7-GT',
    otherNames: ['6SL7', '12SL7-GT', '5691'],
    cathode: 'heater oxide',
    heater: {
      ...HEATER_6V,
      source: manualPage('6SL7-GT'),
      recall: 'from memory, cross-checked',
      note: 'both units; the 12SL7-GT takes 12.6 V, 0.15 A, the 5691 0.6 A',
    },
    rows: [
      publishedRow(
        250,
        -2,
        2.3,
        70,
        1600,
        44000,
        `${manualPage('6SL7-GT')}; confirmed by the curve points at https://www.angelfire.com/planet/funwithtransistors/FIG-4A-06-gif.html`,
        'from memory, cross-checked',
      ),
    ],
    ratings: { maxPlateVolts: 300, maxPlateWatts: 1, source: manualPage('6SL7-GT'), recall: 'from memory' },
    capacitances: picofarads(2.8, 3, 3.8, `${manualPage('6SL7-GT')}, unit 1`, 'from memory'),
    note: 'one unit of a double triode',
  },
  {
    name: '12AX7',
    otherNames: ['ECC83', '12AX7-A', '7025'],
    cathode: 'heater oxide',
    heater: {
      volts: 12.6,
      amps: 0.15,
      source: ECC83_NOTES,
      recall: 'seen',
      note: 'both units; 6.3 V, 0.3 A with the halves in parallel',
    },
    rows: ROW_12AX7,
    ratings: { maxPlateVolts: 300, maxPlateWatts: 1, source: ECC83_NOTES, recall: 'seen' },
    capacitances: picofarads(
      1.7,
      1.6,
      0.46,
      `${manualPage('12AX7')}, unit 1; 1.6 pF grid to cathode seen at ${OP316}`,
      'from memory',
    ),
    note: 'one unit of a double triode',
  },
  {
    name: '6F5',
    otherNames: ['6F5-G', '6F5-GT'],
    cathode: 'heater oxide',
    heater: { ...HEATER_6V, source: manualPage('6F5'), recall: 'from memory, cross-checked' },
    rows: ROW_6F5,
    ratings: { maxPlateVolts: 300, maxPlateWatts: null, source: manualPage('6F5'), recall: 'from memory' },
    capacitances: picofarads(2.3, 5.5, 4, manualPage('6F5'), 'from memory, doubtful'),
  },
  {
    name: '6SF5',
    otherNames: ['6SF5-GT', '12SF5', '12SF5-GT'],
    cathode: 'heater oxide',
    heater: {
      ...HEATER_6V,
      source: manualPage('6SF5'),
      recall: 'from memory, cross-checked',
      note: 'the 12SF5 takes 12.6 V, 0.15 A',
    },
    rows: ROW_6F5,
    ratings: { maxPlateVolts: 300, maxPlateWatts: null, source: manualPage('6SF5'), recall: 'from memory' },
    capacitances: picofarads(2.4, 4, 3.6, manualPage('6SF5'), 'from memory, doubtful'),
    note: 'the 6F5 single-ended: the same rows are printed for both',
  },
  {
    name: '6SQ7',
    otherNames: ['6SQ7-GT', '12SQ7', '12SQ7-GT'],
    cathode: 'heater oxide',
    heater: { ...HEATER_6V, source: manualPage('6SQ7'), recall: 'from memory', note: 'the 12SQ7 takes 12.6 V, 0.15 A' },
    rows: [
      publishedRow(100, -1, 0.5, 100, 925, 110000, `${manualPage('6SQ7')}, late editions`, 'from memory, doubtful'),
      publishedRow(100, -1, 0.4, 100, 900, 110000, `${manualPage('6SQ7')}, early editions`, 'from memory, doubtful'),
      publishedRow(250, -2, 1.1, 100, 1175, 85000, `${manualPage('6SQ7')}, late editions`, 'from memory, doubtful'),
      publishedRow(250, -2, 0.9, 100, 1100, 91000, `${manualPage('6SQ7')}, early editions`, 'from memory, doubtful'),
    ],
    ratings: {
      maxPlateVolts: 300,
      maxPlateWatts: 0.5,
      source: `${manualPage('6SQ7')}, late editions`,
      recall: 'from memory',
    },
    capacitances: picofarads(1.6, 3.2, 3, manualPage('6SQ7'), 'from memory, doubtful'),
    note: 'triode section of a double-diode-triode; early and late editions print different rows, the late ones are used first',
  },
  {
    name: '6AT6',
    otherNames: ['EBC90', '12AT6'],
    cathode: 'heater oxide',
    heater: {
      ...HEATER_6V,
      source: manualPage('6AT6'),
      recall: 'from memory, cross-checked',
      note: 'the 12AT6 takes 12.6 V, 0.15 A',
    },
    rows: [
      publishedRow(100, -1, 0.8, 70, 1300, 54000, manualPage('6AT6'), 'from memory, cross-checked'),
      publishedRow(250, -3, 1, 70, 1200, 58000, manualPage('6AT6'), 'from memory, cross-checked'),
    ],
    ratings: { maxPlateVolts: 300, maxPlateWatts: 0.5, source: manualPage('6AT6'), recall: 'from memory' },
    capacitances: picofarads(2.1, 2.3, 1.1, manualPage('6AT6'), 'from memory'),
    note: 'triode section of a double-diode-triode',
  },
  {
    name: '6AV6',
    otherNames: ['EBC91', '12AV6'],
    cathode: 'heater oxide',
    heater: { ...HEATER_6V, source: OP316, recall: 'seen', note: 'the 12AV6 takes 12.6 V, 0.15 A' },
    rows: ROW_12AX7,
    ratings: { maxPlateVolts: 300, maxPlateWatts: 0.5, source: manualPage('6AV6'), recall: 'from memory' },
    capacitances: picofarads(
      2,
      2.2,
      0.8,
      `${manualPage('6AV6')}; 2.2 pF grid to cathode seen at ${OP316}`,
      'from memory',
    ),
    note: `triode section of a double-diode-triode; the rows are those of the 12AX7, which is two such sections (${OP316})`,
  },
  {
    name: '6AU6 triode-connected',
    otherNames: ['6AU6', '6AU6-A', '6AU6 triode', 'EF94'],
    cathode: 'heater oxide',
    heater: { ...HEATER_6V, source: manualPage('6AU6'), recall: 'from memory' },
    rows: [
      publishedRow(
        250,
        -4.03,
        12.2,
        36,
        4800,
        7500,
        `${manualPage('6AU6')}, bias from 330 ohms in the cathode; plate resistance is mu over transconductance`,
        'from memory',
      ),
    ],
    ratings: { maxPlateVolts: 250, maxPlateWatts: 3.2, source: manualPage('6AU6'), recall: 'from memory' },
    capacitances: picofarads(2.6, 3.2, 1.2, manualPage('6AU6'), 'from memory'),
    note: 'screen and suppressor tied to the plate, as the sheet has it (http://op316.com/tubes/datalib/p6au6t.htm, seen)',
  },
];
