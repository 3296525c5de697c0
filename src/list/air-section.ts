import * as z from 'zod';
import { readQuantity } from '../engine/parts/quantities.ts';
import { choiceOr, quantityOr, type Reading, readField, type Written, words } from './fields.ts';

/** A level as written: volts, or decibels re the wanted station's. */
export type AirLevel = { readonly volts: number } | { readonly decibels: number } | null;

const VOLTS = { atLeast: 0, atMost: 30 } as const;
const LEVEL_EXPECTED = 'a voltage such as 5 mV, decibels re the wanted station such as -20 dB, or none';
const LEVEL_RANGE = '0 V to 30 V, -120 dB to 60 dB, or none';

function readLevel(written: Written): Reading<AirLevel> {
  const text = String(written)
    .replace(/[\u2212\u2013]/g, '-')
    .trim();
  if (/^none$/i.test(text)) return { value: null };
  const decibels = /^([+-]?\s*[\d.]+)\s*dB$/i.exec(text);
  if (decibels) {
    const value = Number((decibels[1] as string).replace(/\s/g, ''));
    if (value >= -120 && value <= 60) return { value: { decibels: value } };
    return { fault: { code: 'out-of-range', where: '', got: text, expected: LEVEL_RANGE } };
  }
  const reading = readQuantity(written, 'voltage', '', VOLTS);
  if ('value' in reading) return { value: { volts: reading.value } };
  const expected = reading.fault.code === 'out-of-range' ? LEVEL_RANGE : LEVEL_EXPECTED;
  return { fault: { ...reading.fault, expected } };
}

function levelOr(standard: string, what: string): z.ZodType<AirLevel, Written | undefined> {
  return readField<AirLevel>(readLevel, LEVEL_EXPECTED, `${what}; ${LEVEL_RANGE}`).prefault(standard);
}

const SPEED_EXPECTED = 'words a minute, such as 13 or 13 wpm; 3 to 60';

function readSpeed(written: Written): Reading<number> {
  const found = /^\s*(\d+(?:\.\d+)?)\s*(wpm|words a minute)?\s*$/i.exec(String(written));
  const value = Number(found?.[1]);
  if (found && value >= 3 && value <= 60) return { value };
  return { fault: { code: 'wrong-speed', where: '', got: String(written), expected: SPEED_EXPECTED } };
}

const CLIP_EXPECTED = 'a sound file beside the list, or none for a carrier alone';

const secondStation = z.strictObject({
  clip: words(500, 'Its programme: a sound file beside the list, or none', CLIP_EXPECTED).prefault('none'),
  offset: quantityOr('9 kHz', 'frequency', { atLeast: -50e3, atMost: 50e3 }, "Its carrier less the wanted station's"),
  level: levelOr('-10 dB', 'Its carrier, rms and unmodulated'),
  modulation: quantityOr('80 %', 'fraction', { atLeast: 0, atMost: 1 }, "Depth at its clip's largest peak"),
  'channel limit': choiceOr(['9 kHz', 'none'], '9 kHz', 'Its audio limit', { '9khz': '9 kHz' }),
});

const statics = z.strictObject({
  level: levelOr('0 dB', 'Rms of a mean crash as it begins, in the noise band'),
  'crashes a second': quantityOr('0.5', 'number', { atLeast: 0, atMost: 1000 }, 'Mean number'),
  decay: quantityOr('30 ms', 'time', { atLeast: 1e-4, atMost: 5 }, 'Until down to 1/e'),
});

const beatOscillator = z.strictObject({
  pitch: quantityOr('800 Hz', 'frequency', { atLeast: 50, atMost: 5000 }, 'Its frequency over the carrier'),
  level: levelOr('6 dB', 'Its voltage at the tap, rms'),
});

const morse = z.strictObject({
  'keyed by': choiceOr(['text', 'clip', 'none'], 'text', 'A text, a clip that is 0 with the key up, or not at all'),
  text: words(2000, 'What is sent', 'a text of 1 to 2000 characters').optional(),
  speed: readField(readSpeed, SPEED_EXPECTED, 'Words a minute, PARIS; 3 to 60').prefault('13'),
  edge: quantityOr('5 ms', 'time', { atLeast: 1e-4, atMost: 0.4 }, 'Raised-cosine edge of each mark'),
});

/** What is on the air besides the wanted station, and how that is keyed. */
export const onTheAir = z.strictObject({
  'second station': secondStation.optional().meta({ description: 'A station on another frequency' }),
  noise: levelOr('none', 'Rms in the noise band, at the tap'),
  'noise band': quantityOr(
    '10 kHz',
    'frequency',
    { atLeast: 100, atMost: 100e3 },
    'Band noise and static are stated in',
  ),
  static: statics.optional().meta({ description: 'Crashes that come by chance' }),
  'beat oscillator': beatOscillator.optional().meta({ description: 'For hearing a carrier that is not modulated' }),
  morse: morse.optional().meta({ description: 'The wanted station is keyed, not modulated' }),
  seed: quantityOr('1', 'number', { atLeast: 0, atMost: 1e9 }, 'Which noise and static'),
});
