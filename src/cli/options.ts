import type { Command } from 'commander';
import { COMMON_METERS, type Meter } from '../engine/circuits/meter-readings.ts';
import { InputError } from '../engine/errors.ts';
import { readMeters } from '../list/meter-words.ts';
import type { WavCoding } from '../results/wav-write.ts';

/** Flags of the parts a builder swaps most, the key of the list each sets, and its help. */
export const PART_FLAGS = [
  ['tube', 'detector.tube', 'TYPE', 'tube type, e.g. 6SL7-GT'],
  ['leak', 'detector.leak', 'R', 'grid leak, e.g. 2M2'],
  ['grid-capacitor', 'detector.grid capacitor', 'C', 'grid capacitor, e.g. 150p'],
  ['load', 'plate.load', 'LOAD', "plate load, e.g. 'resistor 220k'"],
  ['bypass', 'plate.bypass', 'C', 'plate bypass, e.g. 100p'],
  ['supply', 'plate.supply', 'V', 'supply voltage, e.g. 90V'],
  ['carrier', 'station.carrier', 'F', 'carrier frequency, e.g. 920kHz'],
  ['level', 'station.level', 'V', 'carrier level, rms, e.g. 60mV'],
  ['modulation', 'station.modulation', 'M', 'peak modulation, e.g. 80%'],
  ['detector', 'detector.kind', 'KIND', "kind of detector, e.g. 'grid leak'"],
  ['law', 'detector.law', 'LAW', 'tube, square or linear'],
  ['fault', 'fault', 'FAULT', "a part that has failed, e.g. 'weak tube 60 %' or 'leaky coupling 2M'"],
] as const;

/** One key set by a flag; a comma list in the value makes variants. */
export interface KeySetting {
  readonly key: string;
  readonly value: string;
  readonly where: string;
  /** Whether commas belong to the value. */
  readonly whole?: boolean;
}

/** Raw option values as the parser hands them over. */
export type RawOptions = Readonly<Record<string, unknown>>;

/** Adds the flags that every command with a parts list takes. */
export function addPartFlags(command: Command): Command {
  for (const [flag, , placeholder, help] of PART_FLAGS) {
    command.option(`--${flag} <${placeholder}>`, `${help}; a comma list makes variants`);
  }
  return command.option(
    '--set <KEY=VALUE>',
    "any key of the parts list, e.g. 'plate.bypass=150p'; may be repeated",
    (value: string, kept: string[]) => [...kept, value],
    [] as string[],
  );
}

/** The settings that part flags and --set give, in the order of the help. Raises InputError `bad-set`. */
export function keySettings(options: RawOptions): KeySetting[] {
  const settings: KeySetting[] = [];
  for (const [flag, key] of PART_FLAGS) {
    const value = options[flag.replace(/-(\w)/g, (_, letter: string) => letter.toUpperCase())];
    if (typeof value === 'string') settings.push({ key, value, where: `--${flag}` });
  }
  const sent = text(options, 'morse');
  if (sent !== null) settings.push({ key: 'on the air.morse', value: sent, where: '--morse', whole: true });
  const speed = text(options, 'speed');
  if (speed !== null) settings.push({ key: 'on the air.morse.speed', value: speed, where: '--speed' });
  const sets = Array.isArray(options.set) ? options.set : [];
  for (const text of sets.map(String)) {
    const at = text.indexOf('=');
    if (at < 1) {
      throw new InputError({
        code: 'bad-set',
        where: '--set',
        got: JSON.stringify(text),
        expected: "a key and a value with '=' between them, such as plate.bypass=150p",
      });
    }
    settings.push({
      key: text.slice(0, at).trim(),
      value: text.slice(at + 1).trim(),
      where: `--set ${text.slice(0, at).trim()}`,
    });
  }
  return settings;
}

/** A choice among words. Raises InputError `bad-choice`. */
export function choice<Word extends string>(
  options: RawOptions,
  name: string,
  words: readonly Word[],
  standard: Word,
): Word {
  const value = options[name];
  if (value === undefined) return standard;
  const found = words.find((word) => word === value);
  if (found) return found;
  throw new InputError({
    code: 'bad-choice',
    where: `--${name}`,
    got: JSON.stringify(value),
    expected: `one of ${words.join(', ')}`,
  });
}

/** WAV coding asked for with --wav: 24-bit unless said. */
export function wavCoding(options: RawOptions): WavCoding {
  const word = choice(options, 'wav', ['16', '24', '32f'], '24');
  return word;
}

/** Adds the flag of the builder's own meters, for commands that print the socket's voltages. */
export function addMeterFlag(command: Command): Command {
  return command.option('--meter <R>', "your own meter, for the socket voltages: 11M, 20k/V or '20k/V 50 V'");
}

/** The common meters, and those given with --meter. */
export function metersOf(options: RawOptions): readonly Meter[] {
  const own = text(options, 'meter');
  return own === null ? COMMON_METERS : [...COMMON_METERS, ...readMeters(own, '--meter')];
}

export function flag(options: RawOptions, name: string): boolean {
  return options[name] === true;
}

export function text(options: RawOptions, name: string): string | null {
  const value = options[name];
  return typeof value === 'string' ? value : null;
}

/** A whole number given by a flag. Raises InputError `not-whole`. */
export function wholeNumber(options: RawOptions, name: string, standard: number, least: number, most: number): number {
  const written = text(options, name);
  if (written === null) return standard;
  const value = Number(written);
  if (/^\d+$/.test(written) && value >= least && value <= most) return value;
  const expected = `a whole number from ${least} to ${most}`;
  throw new InputError({ code: 'not-whole', where: `--${name}`, got: JSON.stringify(written), expected });
}
