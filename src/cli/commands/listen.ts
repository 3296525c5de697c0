import { mkdir } from 'node:fs/promises';
import { join } from 'node:path';
import { InputError } from '../../engine/errors.ts';
import { renderClipInTurns } from '../../engine/renderer/render-clip.ts';
import { partsListText } from '../../page/parts-list-text.ts';
import { safeFileNames } from '../../results/safe-names.ts';
import { soundComment } from '../../results/sound-comment.ts';
import { writeWav } from '../../results/wav-write.ts';
import { readClip } from '../clip-read.ts';
import { EXIT, type Io } from '../io.ts';
import { variantsFrom } from '../list-input.ts';
import { liveKeys } from '../live/live-keys.ts';
import { LivePlayer } from '../live/live-player.ts';
import { LIVE_PARTS, LiveSet, type LiveVariant, liveGain, statusLine } from '../live/live-set.ts';
import { openSound, type SoundSink, soundOutput } from '../live/live-sound.ts';
import { type LiveTerminal, liveTerminal } from '../live/live-terminal.ts';
import { writeNewFile } from '../new-file.ts';
import type { RawOptions } from '../options.ts';
import { Progress } from '../progress.ts';
import { type SentProgramme, sentProgramme } from '../sent-programme.ts';

/** How often the status line is written anew, ms. */
const STATUS_MILLISECONDS = 250;
const FOLDER = join('out', 'listen');

const KEYS =
  'Keys: 1-9 variant, left/right part, up/down its value, space pause, l level or loudness, w write WAV and list, q leave.\n' +
  'Turn the volume down first: full scale is loud, and hearing does not grow back.\n';

/** What `listen` needs of the outside besides Io, so that tests can stand in for it. */
export interface ListenOutside {
  readonly terminal: LiveTerminal;
  output(rateHertz: number): Promise<{ readonly sink: SoundSink; close(): void }>;
}

/** The clip in a loop, the engine running live, keys to switch and step. */
export async function listen(
  clipPath: string,
  list: string | null,
  options: RawOptions,
  io: Io,
  outside: ListenOutside = { terminal: liveTerminal(), output: soundOutput },
): Promise<number> {
  const { terminal } = outside;
  if (!terminal.isTerminal) {
    throw new InputError({
      code: 'no-terminal',
      where: 'listen',
      got: 'no terminal to take keys from',
      expected: 'to be run in a terminal window',
      hint: 'presolder render writes files to play instead',
    });
  }
  const variants = await variantsFrom(list, options);
  const clip = await readClip(clipPath);
  const rateHertz = clip.sampleRateHertz;
  const progress = new Progress(io, false);
  const breathe = async (): Promise<void> => {
    await new Promise((resolve) => setImmediate(resolve));
  };
  const set = new LiveSet(rateHertz, breathe);
  const programmes = new Map<string, SentProgramme>();
  const ready: LiveVariant[] = [];
  for (const [k, variant] of variants.entries()) {
    progress.tell(`getting ${variant.name} ready`, k / variants.length);
    const { modulation } = sentProgramme(variant, clip, programmes);
    ready.push(await set.ready(variant.name, variant.layers, variant.circuit, modulation));
  }
  progress.clear();
  const first = ready[0] as LiveVariant;
  const { sink, close } = await outside.output(rateHertz);

  let match: 'level' | 'loudness' = 'level';
  let current = first;
  let index = 0;
  let part = 0;
  let message = '';
  const voiced = (variant: LiveVariant) => ({ ...variant.detector, gain: liveGain(variant, ready, match) });
  const player = new LivePlayer(voiced(first), rateHertz);
  let leave: (error: unknown) => void = () => {};
  const left = new Promise<unknown>((resolve) => {
    leave = resolve;
  });
  const sound = await openSound(player, rateHertz, sink, leave);
  const loudest = (): number => Math.max(...ready.map((one) => one.audioVolts), 1e-12);
  const show = (): void => {
    const chosen = LIVE_PARTS[part] as (typeof LIVE_PARTS)[number];
    const line = statusLine(current, index, chosen, match, loudest(), player.seconds, player.isPaused);
    io.err(`\r\u001b[K${line}${message === '' ? '' : `  ${message}`}`);
  };
  const switchTo = (variant: LiveVariant, at: number): void => {
    current = variant;
    index = at;
    player.change(voiced(variant));
  };
  // keys are taken one after another: a value that is being worked out is not overtaken
  let busy: Promise<void> = Promise.resolve();
  const act = async (key: ReturnType<typeof liveKeys>[number]): Promise<void> => {
    message = '';
    switch (key.kind) {
      case 'variant': {
        const variant = ready[key.index];
        if (variant) switchTo(variant, key.index);
        break;
      }
      case 'part':
        part = (part + key.by + LIVE_PARTS.length) % LIVE_PARTS.length;
        break;
      case 'step': {
        const next = await set
          .stepped(current, LIVE_PARTS[part] as (typeof LIVE_PARTS)[number], key.by)
          .catch((error: unknown) => {
            if (!(error instanceof InputError)) throw error;
            return null;
          });
        if (next) switchTo(next, -1);
        else message = 'no further value';
        break;
      }
      case 'pause':
        player.pause(!player.isPaused);
        break;
      case 'match':
        match = match === 'level' ? 'loudness' : 'level';
        player.setGain(liveGain(current, ready, match));
        break;
      case 'write':
        message = `wrote ${await writeVariant(current, rateHertz, liveGain(current, ready, match), breathe)}`;
        break;
      case 'quit':
        leave(null);
    }
    show();
  };
  io.err(KEYS);
  show();
  terminal.listen((sent) => {
    for (const key of liveKeys(sent)) {
      // leaving waits for nothing
      if (key.kind === 'quit') leave(null);
      else busy = busy.then(() => act(key)).catch(leave);
    }
  });
  const timer = setInterval(show, STATUS_MILLISECONDS);
  try {
    const error = await left;
    if (error) throw error;
    return EXIT.done;
  } finally {
    clearInterval(timer);
    terminal.close();
    io.err('\n');
    await sound.stop();
    close();
  }
}

/** The variant's WAV and parts list, under names that are not taken. */
async function writeVariant(
  variant: LiveVariant,
  rateHertz: number,
  gain: number,
  breathe: () => Promise<void>,
): Promise<string> {
  const { rest, laws, modulation } = variant.detector;
  const { volts } = await renderClipInTurns(rest, laws, modulation, rateHertz, 'normal', breathe);
  const { bytes } = writeWav({
    samples: volts.map((value) => value * gain),
    sampleRateHertz: rateHertz,
    format: '24',
    comment: soundComment(variant.name, rest, 1 / gain, 0),
    ditherSeed: 1,
  });
  await mkdir(FOLDER, { recursive: true });
  const stem = safeFileNames([variant.name])[0] as string;
  for (let count = 1; ; count++) {
    const name = join(FOLDER, count === 1 ? stem : `${stem} ${count}`);
    try {
      await writeNewFile(`${name}.yaml`, partsListText(variant.name, Object.assign({}, ...variant.layers), []));
    } catch (error) {
      if (error instanceof InputError && error.faults[0]?.code === 'file-exists' && count < 1000) continue;
      throw error;
    }
    await writeNewFile(`${name}.wav`, bytes);
    return `${name}.wav`;
  }
}
