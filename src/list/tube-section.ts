import * as z from 'zod';
import { choice, quantity, transconductance } from './fields.ts';

const ROW_EXPECTED =
  'rows of the data sheet, such as - { plate: 90 V, grid: -4.5 V, current: 2.5 mA, mu: 9.3, slope: 850 µmho }';
/** Stands for a mapping left out: every key of it may be. */
const EMPTY = {} as never;
const PART_OF_TUBE = { atLeast: 0, atMost: 1e-9 } as const;

const row = z.strictObject(
  {
    plate: quantity('voltage', { above: 0, atMost: 2000 }, 'Plate volts of the row'),
    grid: quantity('voltage', { atLeast: -300, atMost: 100 }, 'Grid volts of the row'),
    current: quantity('current', { above: 0, atMost: 10 }, 'Plate current of the row'),
    mu: quantity('number', { above: 1, atMost: 1000 }, 'Amplification factor').optional(),
    slope: transconductance('Transconductance: µmho, mA/V or µS').optional(),
    'plate resistance': quantity('resistance', { atLeast: 1, atMost: 1e9 }, 'Plate resistance').optional(),
  },
  { error: (issue) => (issue.code === 'invalid_type' ? ROW_EXPECTED : undefined) },
);

/** Keys of a row, and of a reading below. */
export const ROW_KEYS: readonly string[] = Object.keys(row.shape);

const READINGS_EXPECTED = 'two readings, such as - { grid: -0.35 V, leak: 1 MΩ }';

const reading = z.strictObject(
  {
    grid: quantity('voltage', { atLeast: -50, atMost: 50 }, 'Voltage of the free grid against the cathode'),
    leak: quantity('resistance', { atLeast: 1, atMost: 1e12 }, 'Leak at that reading, the meter counted in'),
    'leak returns to': quantity('voltage', { atLeast: -50, atMost: 50 }, 'Volts the leak returns to').optional(),
  },
  { error: (issue) => (issue.code === 'invalid_type' ? READINGS_EXPECTED : undefined) },
);

export const READING_KEYS: readonly string[] = Object.keys(reading.shape);

/** A builder's own tube, or what differs from the catalogue's: every key may be left out. */
export const tubeSection = z.strictObject({
  rows: z
    .array(row, { error: () => ROW_EXPECTED })
    .min(1, ROW_EXPECTED)
    .max(40)
    .optional()
    .meta({ description: 'Rows of the data sheet' }),
  'fit at plate volts': quantity('voltage', { above: 0, atMost: 2000 }, 'Row to fit, by its plate volts').optional(),
  capacitances: z
    .strictObject({
      'grid to plate': quantity('capacitance', PART_OF_TUBE, 'Of the tube alone').optional(),
      'grid to cathode': quantity('capacitance', PART_OF_TUBE, 'Of the tube alone').optional(),
      'plate to cathode': quantity('capacitance', PART_OF_TUBE, 'Of the tube alone').optional(),
    })
    .prefault(EMPTY),
  filament: quantity('voltage', { above: 0, atMost: 150 }, 'Filament or heater volts').optional(),
  'cathode kind': choice(['heater oxide', 'filament oxide', 'filament thoriated'], 'How the cathode is made', {
    heater: 'heater oxide',
  }).optional(),
  'grid current': z
    .strictObject({
      'at zero volts': quantity('current', { atLeast: 0, atMost: 0.1 }, 'Grid current at zero volts').optional(),
      'thermal voltage': quantity('voltage', { atLeast: 0.02, atMost: 1 }, 'Volts of one e-fold below zero').optional(),
      readings: z
        .array(reading, { error: () => READINGS_EXPECTED })
        .min(2, READINGS_EXPECTED)
        .max(2, READINGS_EXPECTED)
        .optional()
        .meta({ description: 'Two voltages of the free grid across known leaks' }),
    })
    .prefault(EMPTY),
});
