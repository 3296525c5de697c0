import { type Fault, InputError } from '../engine/errors.ts';
import type { MorseSending } from '../engine/station/morse.ts';
import { dotSeconds } from '../engine/station/morse.ts';
import { keyedText } from '../engine/station/morse-code.ts';
import type { OnTheAir } from '../engine/station/on-the-air.ts';
import type { AirLevel } from './air-section.ts';
import type { CircuitList } from './schema.ts';

const HERE = 'on the air';

/** What a list puts on the air besides the wanted station. */
export interface ListedAir {
  readonly air: OnTheAir;
  /** File of the second station's clip, as written; null: a carrier alone. */
  readonly otherClip: string | null;
  /** How the wanted station is keyed: a text, the clip, or not at all. */
  readonly keying: MorseSending | 'clip' | null;
}

/** What is on the air; null when it is the wanted station's programme alone. Throws InputError. */
export function listedAir(list: CircuitList): ListedAir | null {
  const written = list[HERE];
  const { 'second station': second, static: crashes, 'beat oscillator': beat, noise, morse } = written;
  const volts = (level: AirLevel, key: string): number => voltsOf(level, key, list.station.level);
  const heard = (level: AirLevel, key: string): boolean => level !== null && volts(level, key) > 0;
  const bandHertz = written['noise band'];
  const secondStation =
    second && heard(second.level, 'second station.level')
      ? {
          offsetHertz: second.offset,
          levelVoltsRms: volts(second.level, 'second station.level'),
          modulation: second.modulation,
          channelLimit: second['channel limit'],
        }
      : null;
  const statics =
    crashes && heard(crashes.level, 'static.level') && crashes['crashes a second'] > 0
      ? {
          levelVoltsRms: volts(crashes.level, 'static.level'),
          bandHertz,
          crashesPerSecond: crashes['crashes a second'],
          decaySeconds: crashes.decay,
        }
      : null;
  const beatOscillator =
    beat && heard(beat.level, 'beat oscillator.level')
      ? { pitchHertz: beat.pitch, levelVoltsRms: volts(beat.level, 'beat oscillator.level') }
      : null;
  const air: OnTheAir = {
    secondStation,
    noise: heard(noise, 'noise') ? { levelVoltsRms: volts(noise, 'noise'), bandHertz } : null,
    statics,
    beatOscillator,
    seed: Math.round(written.seed),
  };
  const keying = morse ? keyingOf(morse) : null;
  const anything = secondStation ?? air.noise ?? statics ?? beatOscillator ?? keying;
  if (anything === null) return null;
  if (!(list.station.level > 0)) {
    throw fault('no-station', 'station.level', '0 V', 'a level above 0 V where other things are on the air');
  }
  const clip = second?.clip ?? 'none';
  return { air, otherClip: secondStation === null || /^none$/i.test(clip) ? null : clip, keying };
}

function voltsOf(level: AirLevel, key: string, stationVolts: number): number {
  if (level === null) return 0;
  if ('volts' in level) return level.volts;
  const volts = stationVolts * 10 ** (level.decibels / 20);
  if (volts > 30) throw fault('out-of-range', `${HERE}.${key}`, `${level.decibels} dB`, '30 V at most');
  return volts;
}

function keyingOf(morse: NonNullable<CircuitList[typeof HERE]['morse']>): MorseSending | 'clip' | null {
  if (morse['keyed by'] === 'none') return null;
  if (morse['keyed by'] === 'clip') return 'clip';
  const { text, speed, edge } = morse;
  if (text === undefined) {
    throw fault('no-morse-text', `${HERE}.morse.text`, 'nothing', "a text to send, or 'keyed by: clip'");
  }
  keyedText(text, `${HERE}.morse.text`);
  if (edge > dotSeconds(speed)) {
    const dot = `${(1000 * dotSeconds(speed)).toFixed(1)} ms`;
    throw fault('edge-too-long', `${HERE}.morse.edge`, `${1000 * edge} ms`, `at most a dot, ${dot} at this speed`);
  }
  return { text, wordsPerMinute: speed, edgeSeconds: edge };
}

function fault(code: string, where: string, got: string, expected: string): InputError {
  const made: Fault = { code, where, got, expected };
  return new InputError(made);
}
