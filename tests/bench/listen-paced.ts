import type { LiveDetector } from '../../src/cli/live/live-player.ts';
import { LivePlayer } from '../../src/cli/live/live-player.ts';
import { openSound } from '../../src/cli/live/live-sound.ts';

/** What live listening took. */
export interface PacedListening {
  /** Processor time over the time that it played. */
  readonly share: number;
  /** Times that the stand-in output ran dry. */
  readonly dry: number;
  readonly playedSeconds: number;
}

/** Sound that a usual output holds before it plays it, s. */
const HELD_SECONDS = 0.1;
const BYTES_A_FRAME = 4;

/**
 * Plays a detector live for a while into a stand-in for a sound output: it plays at the pace of the clock from a buffer of
 * 0.1 s and counts how often that was empty.
 */
export async function listenPaced(
  detector: LiveDetector,
  rateHertz: number,
  forSeconds: number,
): Promise<PacedListening> {
  const bytesASecond = rateHertz * BYTES_A_FRAME;
  let began = Number.NaN;
  let given = 0;
  let dry = 0;
  let finish: (error: unknown) => void = () => {};
  const finished = new Promise<unknown>((resolve) => {
    finish = resolve;
  });
  const clockSeconds = (): number => performance.now() / 1000;
  const sink = (bytes: Uint8Array, done: () => void): void => {
    // it begins to play once its buffer is full, as outputs do
    if (Number.isNaN(began) && given >= HELD_SECONDS * bytesASecond) began = clockSeconds();
    const played = Number.isNaN(began) ? 0 : (clockSeconds() - began) * bytesASecond;
    if (played > given) {
      dry++;
      // from here on the sound is late by what was missing
      began += (played - given) / bytesASecond;
    }
    given += bytes.length;
    if (given >= forSeconds * bytesASecond) {
      finish(null);
      return;
    }
    const ahead = (given - played) / bytesASecond;
    if (ahead > HELD_SECONDS) setTimeout(done, 1000 * (ahead - HELD_SECONDS));
    else setImmediate(done);
  };
  const player = new LivePlayer(detector, rateHertz);
  const before = process.cpuUsage();
  const from = clockSeconds();
  const sound = await openSound(player, rateHertz, sink, finish);
  const fault = await finished;
  const { user, system } = process.cpuUsage(before);
  const playedSeconds = clockSeconds() - from;
  await Promise.race([sound.stop(), new Promise((resolve) => setTimeout(resolve, 500))]);
  if (fault) throw fault;
  return { share: (user + system) / 1e6 / playedSeconds, dry, playedSeconds };
}
