import { Command, CommanderError } from 'commander';
import { InputError } from '../engine/errors.ts';
import { faultText } from '../results/fault-text.ts';
import { EXIT, type Io, Stopped } from './io.ts';
import { addMeterFlag, addPartFlags } from './options.ts';

const EXIT_HELP = `
Exit status: 0 done; 2 the input is wrong (the message names it); 3 a proof or a goal was not met; 130 stopped with Ctrl-C,
nothing half written; 1 a fault of the program.`;

/**
 * The command: parses, runs, and turns faults into messages and an exit status. Never throws.
 *
 * @param argv  arguments after the program's name
 */
export async function run(argv: readonly string[], io: Io): Promise<number> {
  let status: number = EXIT.done;
  const finish = (work: Promise<number>): Promise<void> =>
    work.then((value) => {
      status = value;
    });
  const program = makeProgram(io, finish);
  try {
    if (argv.length === 0) {
      program.outputHelp();
      return EXIT.done;
    }
    await program.parseAsync([...argv], { from: 'user' });
    return status;
  } catch (error) {
    return reportFault(error, io);
  }
}

/** Prints what went wrong for the person it concerns; returns the exit status. */
function reportFault(error: unknown, io: Io): number {
  if (error instanceof CommanderError) return error.exitCode === 0 ? EXIT.done : EXIT.input;
  // a progress line may stand where the message goes
  if (io.talkIsTerminal) io.err('\r\u001b[K');
  if (error instanceof Stopped) {
    io.err('Stopped; nothing was written.\n');
    return EXIT.stopped;
  }
  if (error instanceof InputError) {
    for (const fault of error.faults) io.err(`${faultText(fault)}\n`);
    return EXIT.input;
  }
  const detail = error instanceof Error ? (error.stack ?? error.message) : String(error);
  io.err(`presolder failed; this is a fault of the program, not of your input.\n${detail}\n`);
  return EXIT.fault;
}

function makeProgram(io: Io, finish: (work: Promise<number>) => Promise<void>): Command {
  const program = new Command('presolder')
    .description('Hear a tube detector before you solder it.')
    .exitOverride()
    .configureOutput({ writeOut: (text) => io.out(text), writeErr: (text) => io.err(text) })
    .showHelpAfterError('(presolder COMMAND --help shows what it takes)')
    .addHelpText(
      'after',
      `${EXIT_HELP}

Examples:
  presolder start                                  writes a commented parts list to begin with
  presolder respond my-set.yaml                    tables on paper, no clip
  presolder render speech.wav my-set.yaml          WAV files, tables and a plot in a folder under out/
  presolder render speech.wav --bypass 47p,100p,1n three bypass values on the standard set`,
    );

  addMeterFlag(addPartFlags(program.command('render')))
    .description('The main job: a clip through each variant, as WAV files with tables and a plot.')
    .argument('[clip]', 'programme: WAV, or FLAC, MP3, Ogg; none for a text in Morse')
    .argument('[list]', 'parts list (YAML); left out: the standard one-tube set')
    .option('--measured <FILE>', 'a measured response, Hz and dB or volts, laid over plot and tables')
    .option('--out <DIR>', 'folder for the results; left out: a folder under out/')
    .option('--morse <TEXT>', 'sends this in Morse, in place of a clip')
    .option('--speed <WPM>', 'its speed in words a minute; a comma list makes variants')
    .option('--match <HOW>', 'level keeps the true differences, loudness makes all equally loud', 'level')
    .option('--wav <BITS>', '16, 24 or 32f (float)', '24')
    .option('--workers <N>', "threads; left out: the machine's cores for long clips")
    .option('--quality <Q>', 'normal, or fine (twice the solutions a second)', 'normal')
    .option('--open', 'open the listening page when it is written')
    .option('--json', 'print the result file, nothing else')
    .option('--quiet', 'no progress, no summary')
    .addHelpText(
      'after',
      `
Examples:
  presolder render speech.wav my-set.yaml
  presolder render speech.wav my-set.yaml --bypass 47p,100p,250p --match loudness
  presolder render speech.wav --tube 12AX7,76 --leak 1M,2M2 --out out/tubes
  presolder render my-set.yaml --morse 'CQ CQ' --speed 13 --set 'on the air.beat oscillator=800 Hz'`,
    )
    .action((clip: string | undefined, list: string | undefined, options: Record<string, unknown>) =>
      finish(import('./commands/render.ts').then((module) => module.render(clip ?? null, list ?? null, options, io))),
    );

  addMeterFlag(addPartFlags(program.command('respond')))
    .description('Rest point, response, cost by part, distortion and sensitivity, without a clip.')
    .argument('[list]', 'parts list (YAML); left out: the standard one-tube set')
    .option('--measured <FILE>', 'a measured response, Hz and dB or volts, laid over plot and tables')
    .option('--out <DIR>', 'also write result.json, tables and plot there')
    .option('--json', 'print the result file, nothing else')
    .option('--quiet', 'no progress')
    .addHelpText(
      'after',
      `
Examples:
  presolder respond my-set.yaml
  presolder respond --bypass 0,100p,1n --load 'resistor 56k'
  presolder respond my-set.yaml --fault 'none,weak tube 60 %,leaky coupling 2M' --meter 11M
  presolder respond my-set.yaml --out out/paper`,
    )
    .action((list: string | undefined, options: Record<string, unknown>) =>
      finish(import('./commands/respond.ts').then((module) => module.respond(list ?? null, options, io))),
    );

  addPartFlags(program.command('spread'))
    .description('What part tolerances do: the band of responses, levels and rest points, and which part carries most.')
    .argument('[list]', 'parts list (YAML); left out: the standard one-tube set')
    .option('--runs <N>', 'random circuits, 50 to 100000', '500')
    .option('--seed <S>', 'which ones: the same number gives the same circuits', '1')
    .option('--parts <AGE>', 'tolerances where the list states none: old or new', 'old')
    .option('--workers <N>', "threads; left out: the machine's cores")
    .option('--out <DIR>', 'also write spread.json, tables and plot there')
    .option('--json', 'print spread.json, nothing else')
    .option('--quiet', 'no progress')
    .addHelpText(
      'after',
      `
A tolerance is written behind a value, on the list or in a flag: 100p +-20%, 220k -10/+30%, 10 uA */ 3.
Examples:
  presolder spread my-set.yaml
  presolder spread my-set.yaml --bypass '220p +-20%,220p +-5%' --out out/tolerances
  presolder spread my-set.yaml --parts new --runs 2000`,
    )
    .action((list: string | undefined, options: Record<string, unknown>) =>
      finish(import('./commands/spread.ts').then((module) => module.spread(list ?? null, options, io))),
    );

  addPartFlags(program.command('prove'))
    .description('Runs the carrier-cycle reference on the list and prints its difference to the renderer.')
    .argument('[list]', 'parts list (YAML); left out: the standard one-tube set')
    .option('--tones <HZ>', 'audio tones, a comma list', '50,400,2500,10000')
    .option('--depths <PERCENT>', 'modulation depths, a comma list', '30,80')
    .option('--json', 'print the comparison as JSON, nothing else')
    .option('--quiet', 'no progress')
    .addHelpText(
      'after',
      `
The reference integrates every carrier cycle and takes seconds to minutes a tone. Exit status 3: outside the limits.
Example:
  presolder prove my-set.yaml --tones 400,5000`,
    )
    .action((list: string | undefined, options: Record<string, unknown>) =>
      finish(import('./commands/prove.ts').then((module) => module.prove(list ?? null, options, io))),
    );

  addPartFlags(program.command('choose'))
    .description('The value of a part that meets a goal, with its neighbors; or what explains a measurement.')
    .argument('<part>', 'bypass, leak, grid capacitor, load, coupling, supply, …; two with a comma for two goals')
    .argument('[list]', 'parts list (YAML); left out: the standard one-tube set')
    .option('--until <GOAL>', "such as '-6 dB at 5 kHz', 'corner 3.5 kHz', 'loudest with corner above 3 kHz'")
    .option('--fit <FILE>', 'a measured response, Hz and dB or volts: finds up to three parts that explain it')
    .option('--series <E>', 'values that can be had: E6, E12 or E24 (left out: E12)')
    .option('--drawer <VALUES>', "your own: '47p,100p,150p'; with semicolons between the parts")
    .option('--between <VALUES>', "where to search: '10p,10n'")
    .option('--json', 'print the answer as JSON, nothing else')
    .option('--quiet', 'no progress')
    .addHelpText(
      'after',
      `
Goals: -6 dB at 5 kHz; corner 3.5 kHz; low corner 80 Hz; second harmonic 3 % at 400 Hz, 80 % modulation; carrier on
plate 100 mV; plate 45 V; loaded Q 40; loudest with corner above 3 kHz. Exit status 3: it cannot be met.
Examples:
  presolder choose bypass my-set.yaml --until 'corner 1.2 kHz'
  presolder choose leak my-set.yaml --until 'loudest with second harmonic below 10 %' --drawer 470k,1M,2M2
  presolder choose bypass,leak my-set.yaml --until 'corner 1.2 kHz; second harmonic 12 %'
  presolder choose bypass,leak my-set.yaml --fit measured.csv`,
    )
    .action((part: string, list: string | undefined, options: Record<string, unknown>) =>
      finish(import('./commands/choose.ts').then((module) => module.choose(part, list ?? null, options, io))),
    );

  addPartFlags(program.command('listen'))
    .description('Plays the clip in a loop through the engine, live: keys switch variants and step parts.')
    .argument('<clip>', 'programme: WAV, or FLAC, MP3, Ogg')
    .argument('[list]', 'parts list (YAML); left out: the standard one-tube set')
    .addHelpText(
      'after',
      `
Keys: 1-9 variant, left/right part, up/down its value, space pause, l level or loudness, w write WAV and list, q leave.
Example:
  presolder listen speech.wav my-set.yaml --bypass 47p,100p,1n`,
    )
    .action((clip: string, list: string | undefined, options: Record<string, unknown>) =>
      finish(import('./commands/listen.ts').then((module) => module.listen(clip, list ?? null, options, io))),
    );

  program
    .command('stock')
    .description('The catalogue, with sources: tubes with their published rows and how well the law meets them.')
    .argument('[kind]', 'tubes, transformers, chokes, phones, outputs, hearing')
    .argument('[name]', 'one part of that kind')
    .option('--supply <V>', 'supply voltage that chooses the row the law is taken from', '90V')
    .option('--ratio <1:N>', "a transformer's readings: turns ratio")
    .option('--source <R>', 'resistance of generator and added resistor')
    .option('--low-corner <F>', 'frequency at which the output is 3 dB down')
    .option('--resonance <F>', 'frequency of the highest output')
    .option('--height <DB>', 'its height over mid frequencies, halfway in octaves between corner and resonance')
    .option('--mid-loss <DB>', 'primary volts below those of the open generator there: tells the core loss')
    .option('--primary-dc <R>', 'DC resistance of the primary')
    .option('--secondary-dc <R>', 'DC resistance of the secondary')
    .option('--load <R>', 'load of the secondary while reading, if any')
    .option('--meter <C>', 'capacitance of meter and leads, if any')
    .option('--json', 'print it as JSON, nothing else')
    .addHelpText(
      'after',
      '\nExamples:\n  presolder stock\n  presolder stock tubes 6SL7-GT --supply 250V\n  presolder stock transformers --ratio 1:3 --source 10k --low-corner 40Hz --resonance 9.6kHz --height 4dB --mid-loss 0.4dB --primary-dc 1k --secondary-dc 8k',
    )
    .action((kind: string | undefined, name: string | undefined, options: Record<string, unknown>) =>
      finish(import('./commands/stock.ts').then((module) => module.stock(kind ?? null, name ?? null, options, io))),
    );

  program
    .command('start')
    .description('Writes a commented parts list to begin with; never over a file that is there.')
    .argument('[file]', 'its name', 'parts-list.yaml')
    .addHelpText('after', '\nExample:\n  presolder start my-set.yaml')
    .action((file: string) => finish(import('./commands/start.ts').then((module) => module.start(file, io))));

  return program;
}
