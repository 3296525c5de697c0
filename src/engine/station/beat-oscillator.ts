import type { Envelope } from './envelope.ts';

/** A local oscillator beside the wanted carrier, for heterodyne reception of an unmodulated one. */
export interface BeatOscillator {
  /** Its frequency less the wanted carrier's, Hz: the pitch of the beat. */
  readonly pitchHertz: number;
  /** V rms at the tap, where the station's level is counted. */
  readonly levelVoltsRms: number;
}

/** Adds the oscillator to what is on the air. */
export function addBeatOscillator(
  { modulation, quadrature }: Envelope,
  oscillator: BeatOscillator,
  wantedVoltsRms: number,
  rateHertz: number,
): void {
  const ratio = oscillator.levelVoltsRms / wantedVoltsRms;
  for (let n = 0; n < modulation.length; n++) {
    const angle = 2 * Math.PI * (((oscillator.pitchHertz * n) / rateHertz) % 1);
    modulation[n] = (modulation[n] as number) + ratio * Math.cos(angle);
    quadrature[n] = (quadrature[n] as number) + ratio * Math.sin(angle);
  }
}
