/** What was on the air besides the wanted station, and how its audio comes out of it. Levels at the output, V rms. */
export interface OnTheAirRecord {
  readonly secondStation: {
    /** File of its programme; null: a carrier alone. */
    readonly clip: string | null;
    readonly offsetHertz: number;
    readonly levelVoltsRms: number;
    readonly modulation: number;
    readonly channelLimit: string;
  } | null;
  readonly noise: { readonly levelVoltsRms: number; readonly bandHertz: number } | null;
  readonly statics: {
    readonly levelVoltsRms: number;
    readonly bandHertz: number;
    readonly crashesPerSecond: number;
    readonly decaySeconds: number;
  } | null;
  readonly beatOscillator: { readonly pitchHertz: number; readonly levelVoltsRms: number } | null;
  readonly seed: number;
  /** How the wanted station is keyed: a text, the clip, or null for a programme. */
  readonly morse:
    | { readonly text: string; readonly wordsPerMinute: number; readonly edgeSeconds: number }
    | 'clip'
    | null;
  /** Audio with nothing to disturb it. */
  readonly wantedAloneVoltsRms: number;
  /** Its part in the disturbed output: the projection of that on what it gives alone. */
  readonly wantedVoltsRms: number;
  /** All the rest of the disturbed output. */
  readonly unwantedVoltsRms: number;
  /** Wanted over unwanted, dB; null where there is none of one. */
  readonly wantedOverUnwantedDecibels: number | null;
  /** Beat of the two carriers; null without a second station, or where the clip's rate does not hold it. */
  readonly whistle: {
    readonly hertz: number;
    readonly voltsRms: number;
    /** Over the wanted audio; null where there is none of one. */
    readonly decibels: number | null;
  } | null;
  /** The keyed tone, measured with nothing to disturb it; null where nothing beats. */
  readonly tone: {
    readonly hertz: number;
    /** While the key is down. */
    readonly voltsRms: number;
    /** 10 to 90 %; null where no mark was found whole. */
    readonly riseSeconds: number | null;
    /** Band about the pitch with 99 % of the power. */
    readonly bandwidthHertz: number;
  } | null;
}
