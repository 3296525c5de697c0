import { manualPage, picofarads, publishedRow, type TubeType } from './tube-type.ts';

const SYLVANIA = 'Sylvania Technical Manual, data page of the 1LE3';

/** Battery tubes: the bias of every row is counted from the negative end of the filament. */
export const BATTERY_TUBES: readonly TubeType[] = [
  {
    name: '01-A',
    otherNames: ['201-A', 'UX-201-A', 'UX-201', '301-A', '401-A'],
    cathode: 'filament thoriated',
    heater: {
      volts: 5,
      amps: 0.25,
      source: 'https://radiomann.sakura.ne.jp/HomePageVT/Radio_tube_1_226.html',
      recall: 'seen',
    },
    rows: [
      publishedRow(90, -4.5, 2.5, 8, 725, 11000, manualPage('01-A'), 'from memory, cross-checked'),
      publishedRow(135, -9, 3, 8, 800, 10000, manualPage('01-A'), 'from memory, cross-checked'),
    ],
    ratings: {
      maxPlateVolts: 135,
      maxPlateWatts: null,
      source: 'https://htfbw.com/hobbies/Ham-Radio/18225.shtml (no dissipation is printed)',
      recall: 'seen',
    },
    capacitances: picofarads(8.1, 3.1, 2.2, manualPage('01-A'), 'from memory'),
  },
  {
    name: '30',
    otherNames: ['1H4-G', '1H4', '230'],
    cathode: 'filament oxide',
    heater: { volts: 2, amps: 0.06, source: manualPage('30'), recall: 'from memory, cross-checked' },
    rows: [
      publishedRow(90, -4.5, 2.5, 9.3, 850, 11000, manualPage('30'), 'from memory, cross-checked'),
      publishedRow(135, -9, 3, 9.3, 900, 10300, manualPage('30'), 'from memory, cross-checked'),
      publishedRow(180, -13.5, 3.1, 9.3, 900, 10300, manualPage('30'), 'from memory, cross-checked'),
    ],
    ratings: { maxPlateVolts: 180, maxPlateWatts: null, source: manualPage('30'), recall: 'from memory' },
    capacitances: picofarads(6, 3, 2.1, `${manualPage('30')}; some printings give 3.7 and 2.5 pF`, 'from memory'),
    note: 'the 1H4-G is the same tube on an octal base',
  },
  {
    name: '1H5-GT',
    otherNames: ['1H5-G', '1H5'],
    cathode: 'filament oxide',
    heater: { volts: 1.4, amps: 0.05, source: manualPage('1H5-GT'), recall: 'from memory' },
    rows: [publishedRow(90, 0, 0.15, 65, 275, 240000, manualPage('1H5-GT'), 'from memory')],
    ratings: { maxPlateVolts: 110, maxPlateWatts: null, source: manualPage('1H5-GT'), recall: 'from memory' },
    capacitances: picofarads(1, 1.1, 4.6, manualPage('1H5-GT'), 'from memory, doubtful'),
    note: 'triode section of a diode-triode',
  },
  {
    name: '1G4-GT',
    otherNames: ['1G4-G', '1G4'],
    cathode: 'filament oxide',
    heater: { volts: 1.4, amps: 0.05, source: manualPage('1G4-GT'), recall: 'from memory' },
    rows: [publishedRow(90, -6, 2.3, 8.8, 825, 10700, manualPage('1G4-GT'), 'from memory')],
    ratings: { maxPlateVolts: 110, maxPlateWatts: null, source: manualPage('1G4-GT'), recall: 'from memory, doubtful' },
    capacitances: picofarads(2.8, 2.2, 3.4, manualPage('1G4-GT'), 'from memory, doubtful'),
  },
  {
    name: '1LE3',
    otherNames: [],
    cathode: 'filament oxide',
    heater: { volts: 1.4, amps: 0.05, source: SYLVANIA, recall: 'from memory' },
    rows: [
      publishedRow(90, -3, 1.4, 14.5, 760, 19000, SYLVANIA, 'from memory'),
      publishedRow(90, 0, 4.5, 14.5, 1300, 11200, SYLVANIA, 'from memory'),
    ],
    ratings: { maxPlateVolts: 110, maxPlateWatts: null, source: SYLVANIA, recall: 'from memory' },
    capacitances: picofarads(1.7, 1.7, 3, SYLVANIA, 'from memory, doubtful'),
  },
];
