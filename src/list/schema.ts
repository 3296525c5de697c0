import * as z from 'zod';
import { HEARING_NAMES } from '../engine/hearing/hearing-curves.ts';
import { formatQuantity } from '../engine/parts/format-quantity.ts';
import { SOCKET_STRAYS } from '../engine/tubes/socketed-tube.ts';
import { onTheAir } from './air-section.ts';
import { CAPACITY_EXPECTED, readBatteryCapacity } from './battery-capacity.ts';
import { dottedFields } from './dotted-keys.ts';
import {
  choice,
  choiceOr,
  length,
  quantity,
  quantityOr,
  quantityOrNone,
  quantityOrNull,
  readField,
  words,
} from './fields.ts';
import { PART_FAULT_EXPECTED, readPartFaults } from './part-fault-words.ts';
import { plateLoad, transformerKeys } from './plate-load.ts';
import { tubeSection } from './tube-section.ts';

const OHMS = { atLeast: 1, atMost: 1e9 } as const;
const FARADS = { atLeast: 0.1e-12, atMost: 1 } as const;
const FARADS_OR_NONE = { ...FARADS, orZero: true } as const;
const STRAY = { atLeast: 0, atMost: 1e-9 } as const;
const Q = { atLeast: 1, atMost: 2000 } as const;

/** Defaults of the tuned circuit as built; they hold only where no loaded Q is given, so the schema leaves them open. */
export const STANDARD_COIL = { coilHenries: 200e-6, unloadedQ: 90 } as const;

const HEARD = 'What it is heard through: a kind of earpiece or speaker, or a CSV file of Hz and dB';

const picofarads = (farads: number): string => formatQuantity(farads, 'capacitance');

const name = words(80, 'Name of the receiver or experiment', 'a name of 1 to 80 characters');

const station = z.strictObject({
  carrier: quantityOr('920 kHz', 'frequency', { atLeast: 30e3, atMost: 30e6 }, 'Carrier frequency'),
  level: quantityOr(
    '60 mV',
    'voltage',
    { atLeast: 0, atMost: 30 },
    'Carrier, rms and unmodulated, at the tap with no detector connected',
  ),
  modulation: quantityOr('80 %', 'fraction', { atLeast: 0, atMost: 2 }, "Depth at the clip's largest peak"),
  'pre-emphasis': choiceOr(['none', 'nrsc-1'], 'none', "The transmitter's treble boost"),
  'channel limit': choiceOr(['none', '9 kHz'], 'none', 'Audio limit of a crowded 9 kHz channel', { '9khz': '9 kHz' }),
  side: choiceOr(['both', 'left', 'right'], 'both', 'Which side of a stereo clip is the programme'),
});

const tunedCircuit = z.strictObject({
  coil: quantity('inductance', { atLeast: 1e-6, atMost: 1 }, 'The whole coil (200 µH when left out)').optional(),
  capacitor: quantity(
    'capacitance',
    { atLeast: 1e-12, atMost: 1e-6 },
    'Tuning capacitance, in place of the coil',
  ).optional(),
  turns: quantity(
    'number',
    { atLeast: 1, atMost: 2000 },
    'Turns of a single-layer coil, in place of its inductance',
  ).optional(),
  diameter: length('Diameter of the winding').optional(),
  length: length('Length of the winding').optional(),
  'antenna resistance': quantityOrNone(
    'none',
    'resistance',
    { atLeast: 100, atMost: 1e9 },
    'What the antenna puts across the coil',
  ),
  'unloaded Q': quantity('number', Q, 'Q of coil and tuning capacitor alone (90 when left out)').optional(),
  'loaded Q': quantity('number', Q, 'Alone: a stiff source whose level is that at the detector').optional(),
  tap: quantity(
    'number',
    { atLeast: 0.01, atMost: 1 },
    "Part of the coil's voltage at the detector (1 when left out)",
  ).optional(),
  retune: choiceOr(['yes', 'no'], 'yes', "Dial set again for the detector's capacitance", { true: 'yes', false: 'no' }),
  detune: quantityOr('0 Hz', 'frequency', { atLeast: -3e6, atMost: 3e6 }, 'Station minus resonance'),
});

const detector = z.strictObject({
  kind: choiceOr(
    ['grid leak', 'plate bend', 'infinite impedance', 'diode', 'crystal'],
    'grid leak',
    'Kind of detector',
    { 'anode bend': 'plate bend', 'plate bend': 'plate bend', galena: 'crystal' },
  ),
  law: choiceOr(['tube', 'square', 'linear'], 'tube', "The tube's own law, or of a grid leak a textbook's"),
  tube: words(40, 'Tube type', 'a tube type such as 6SL7-GT, 76, 01-A').prefault('6SL7-GT'),
  'grid capacitor': quantityOr('150 pF', 'capacitance', FARADS, 'Grid capacitor'),
  'grid capacitor leakage': quantityOrNone('none', 'resistance', { atLeast: 1, atMost: 1e12 }, 'Its own leakage'),
  leak: quantityOrNone('2M2', 'resistance', OHMS, 'Grid leak'),
  'leak position': choiceOr(['to cathode', 'across capacitor'], 'to cathode', 'Where the leak is soldered'),
  'leak returns to': choiceOr(['cathode', 'filament -', 'filament +'], 'cathode', 'Where its far end goes', {
    'filament-': 'filament -',
    'filament+': 'filament +',
  }),
  'charge resistance': quantityOrNone('none', 'resistance', OHMS, 'Of the linear law (a thousandth of the leak)'),
  'cathode resistor': quantityOrNull('resistance', OHMS, 'Of plate bend or infinite impedance').optional(),
  'cathode capacitor': quantity('capacitance', FARADS_OR_NONE, 'Across the cathode resistor').optional(),
  bias: quantity('voltage', { atLeast: -100, atMost: 0 }, 'Of a battery in the grid lead of plate bend').optional(),
  'rest current': quantity(
    'current',
    { atLeast: 1e-7, atMost: 0.1 },
    'Plate current without carrier that a plate bend is biased for (0.2 mA when no bias is stated)',
  ).optional(),
  diode: choice(['vacuum', 'germanium', 'galena'], 'Kind of diode or crystal').optional(),
  perveance: quantity('number', { above: 0, atMost: 1 }, 'Of a vacuum diode, A/V^1.5').optional(),
  'saturation current': quantity('current', { above: 0, atMost: 0.01 }, 'Of a crystal').optional(),
  ideality: quantity('number', { atLeast: 0.5, atMost: 10 }, 'Of a crystal').optional(),
  'series resistance': quantity('resistance', { atLeast: 0, atMost: 1e6 }, 'Of a crystal').optional(),
  'diode capacitance': quantity('capacitance', FARADS_OR_NONE, 'Between its ends').optional(),
  'diode load': quantityOrNull('resistance', OHMS, 'What a diode charges its bypass across').optional(),
  'diode bypass': quantity('capacitance', FARADS_OR_NONE, 'Across the diode load').optional(),
  'filter resistor': quantityOrNull('resistance', OHMS, 'From the diode load to a second capacitor').optional(),
  'filter capacitor': quantityOr('100 pF', 'capacitance', FARADS_OR_NONE, 'Behind the filter resistor'),
  volume: quantityOr('100 %', 'fraction', { atLeast: 0, atMost: 1 }, 'Setting of the volume control'),
});

const BATTERY = 'Capacity of a B battery, for how long it lasts: 500 mAh; 1 mAh to 1000 Ah, or none';

const plate = z.strictObject({
  supply: quantityOr('90 V', 'voltage', { atLeast: 0, atMost: 1000 }, 'Supply'),
  load: plateLoad,
  bypass: quantityOr('220 pF', 'capacitance', FARADS_OR_NONE, 'Bypass from plate to cathode'),
  'carrier choke': quantityOrNone('none', 'inductance', { atLeast: 1e-6, atMost: 10 }, 'Between plate and load'),
  'carrier choke resistance': quantityOr('50 Ω', 'resistance', { atLeast: 0, atMost: 1e5 }, 'DC resistance of it'),
  'carrier choke capacitance': quantityOr('3 pF', 'capacitance', STRAY, 'Capacitance across it'),
  'second bypass': quantityOr('0 pF', 'capacitance', FARADS_OR_NONE, 'Behind the carrier choke, to cathode'),
  'dropping resistor': quantityOrNone('none', 'resistance', OHMS, 'In the supply lead'),
  'dropping capacitor': quantityOr('1 µF', 'capacitance', FARADS_OR_NONE, 'From the far end of it to cathode'),
  'battery capacity': readField(readBatteryCapacity, CAPACITY_EXPECTED, BATTERY).prefault('none'),
});

const output = z.strictObject({
  coupling: quantityOr('10 nF', 'capacitance', FARADS, 'Coupling capacitor of a resistor or choke load'),
  into: choiceOr(
    ['next grid', 'ceramic earpiece', 'crystal earpiece', 'phones', 'low-impedance earpiece', 'nothing'],
    'next grid',
    'What the stage feeds',
  ),
  'load resistance': quantity('resistance', OHMS, 'In place of that of what it feeds, or beside phones').optional(),
  'load capacitance': quantity('capacitance', FARADS_OR_NONE, 'In place of that of what it feeds').optional(),
  matching: z
    .strictObject(transformerKeys)
    .optional()
    .meta({ description: 'Matching transformer ahead of what is fed: 1:0.1, or a mapping' }),
  'heard through': words(
    200,
    HEARD,
    `one of ${HEARING_NAMES.join(', ')}, or a curve of your own such as cone.csv`,
  ).prefault('flat'),
});

/** Strays of a socket and its wiring; their sources stand with the figures. */
const strays = z.strictObject({
  grid: quantityOr(picofarads(SOCKET_STRAYS.gridCathodeFarads), 'capacitance', STRAY, 'Grid to cathode'),
  plate: quantityOr(picofarads(SOCKET_STRAYS.plateCathodeFarads), 'capacitance', STRAY, 'Plate to cathode'),
  'grid to plate': quantityOr(picofarads(SOCKET_STRAYS.gridPlateFarads), 'capacitance', STRAY, 'Grid to plate'),
});

const FAULT = 'A part that has failed, for comparing voltages and sound: leaky coupling 2 MΩ, weak tube 60 %';

/** Stands for a section left out. Every key of one has its default, which the types of the fields cannot say. */
const EMPTY = {} as never;

/** Everything that makes one circuit; every key may be left out. */
export const circuitShape = {
  station: station.prefault(EMPTY),
  'tuned circuit': tunedCircuit.prefault(EMPTY),
  detector: detector.prefault(EMPTY),
  plate: plate.prefault(EMPTY),
  output: output.prefault(EMPTY),
  strays: strays.prefault(EMPTY),
  'on the air': onTheAir.prefault(EMPTY),
  tube: tubeSection.prefault(EMPTY),
  fault: readField(readPartFaults, PART_FAULT_EXPECTED, FAULT).prefault('none'),
};

/** One circuit of a parts list, without its variants. */
export const circuitList = z.strictObject({ name: name.optional(), ...circuitShape });

/** Every key a variant or a flag may change, dotted, with its field. */
export const CHANGEABLE: ReadonlyMap<string, z.ZodType> = new Map<string, z.ZodType>([
  ...dottedFields(circuitShape),
  // a mapping that may also stand on one line, as a load may
  ['output.matching', output.shape.matching],
  ['on the air.second station', onTheAir.shape['second station']],
  ['on the air.static', onTheAir.shape.static],
  ['on the air.beat oscillator', onTheAir.shape['beat oscillator']],
  ['on the air.morse', onTheAir.shape.morse],
]);

/** The whole parts list: the one definition that checking and the JSON Schema come from. */
export const partsList = z.strictObject({
  name: name.optional(),
  ...circuitShape,
  variants: z
    .record(
      z.string(),
      z.strictObject(Object.fromEntries([...CHANGEABLE].map(([key, field]) => [key, field.optional()]))),
    )
    .optional()
    .meta({ description: 'What changes, by the name of the variant' }),
});

export type CircuitList = z.output<typeof circuitList>;
