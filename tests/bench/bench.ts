// One table of how fast things are: medians, and ratios to the carrier-cycle reference measured in the same run.
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { cpus, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import WavEncoder from 'wav-encoder';
import { analyse } from '../../src/engine/circuits/analysis.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { referenceSource } from '../../src/engine/proof/reference-request.ts';
import { runReference } from '../../src/engine/reference/run-reference.ts';
import { renderClip } from '../../src/engine/renderer/render-clip.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { programmeFrom } from '../../src/engine/station/programme.ts';
import { listVariants } from '../../src/list/variants.ts';
import { readWav } from '../../src/results/wav-read.ts';
import { writeWav } from '../../src/results/wav-write.ts';
import { listenPaced } from './listen-paced.ts';
import { medianClockSeconds, medianSeconds } from './median.ts';
import { againstOde } from './ode-yardstick.ts';

// the bundle lies in out/
const root = fileURLToPath(new URL('../', import.meta.url));
const command = join(root, 'out', 'build', 'presolder.mjs');
const clipPath = join(root, 'samples', 'speech.wav');
const clipBytes = new Uint8Array(readFileSync(clipPath));
const clip = readWav(clipBytes, clipPath);
const seconds = clip.frames / clip.sampleRateHertz;
const rows: (readonly [string, string, string])[] = [];
const say = (what: string, figure: string, ratio = ''): void => {
  rows.push([what, figure, ratio]);
};

const circuitOf = (settings: Record<string, string>) =>
  (
    listVariants(
      '',
      'bench',
      Object.entries(settings).map(([key, value]) => ({ key, value, where: key })),
    )[0] as ReturnType<typeof listVariants>[number]
  ).circuit;

const programme = programmeFrom(clip.channels[0] as Float64Array, 0.8).modulation;

// yardstick: what one second of programme costs when every carrier cycle is integrated
const weak = restPoint(circuitOf({ 'station.level': '60 mV' }));
const referenceSeconds = await medianSeconds(3, () => {
  runReference(
    weak.circuit,
    { audioHertz: 1000, modulation: 0.8, source: referenceSource(weak) },
    { settleSeconds: 0.02, periods: 5 },
  );
});
const everyCycle = referenceSeconds / 0.025;
say('every carrier cycle (920 kHz), per second of programme', `${everyCycle.toFixed(1)} s`, '1');

for (const level of ['5 mV', '60 mV', '1 V', '5 V']) {
  for (const quality of level === '60 mV' ? (['normal', 'fine'] as const) : (['normal'] as const)) {
    const rest = restPoint(circuitOf({ 'station.level': level }));
    const laws = new TableStore().lawsFor(rest, 1);
    const took = await medianSeconds(3, () => {
      renderClip(rest, laws, programme, clip.sampleRateHertz, quality);
    });
    say(
      `render, resistor, ${level}, ${quality}`,
      `${(seconds / took).toFixed(0)} × real time`,
      `${((everyCycle * seconds) / took).toFixed(0)}`,
    );
  }
}
say(
  'tables, 1 V',
  `${(1000 * (await medianSeconds(3, () => void new TableStore().lawsFor(restPoint(circuitOf({ 'station.level': '1 V' })), 1)))).toFixed(0)} ms`,
);
say('analysis of one circuit', `${(1000 * (await medianSeconds(3, () => void analyse(circuitOf({}))))).toFixed(0)} ms`);
say(
  'decode the clip',
  `${(seconds / (await medianSeconds(5, () => void readWav(clipBytes, clipPath).mono('both')))).toFixed(0)} × real time`,
);
const samples = clip.channels[0] as Float64Array;
say(
  'encode 24 bits',
  `${(seconds / (await medianSeconds(5, () => void writeWav({ samples, sampleRateHertz: 48_000, format: '24', comment: '', ditherSeed: 1 })))).toFixed(0)} × real time`,
);

for (const load of ['choke large', 'transformer 1:3', 'phones 2k']) {
  const rest = restPoint(circuitOf({ 'plate.load': load, 'detector.tube': '76', 'tuned circuit.loaded Q': '40' }));
  const laws = new TableStore().lawsFor(rest, 1);
  const took = await medianSeconds(3, () => {
    renderClip(rest, laws, programme, clip.sampleRateHertz);
  });
  say(
    `render, ${load}, stiff source, 60 mV`,
    `${(seconds / took).toFixed(0)} × real time`,
    `${((everyCycle * seconds) / took).toFixed(0)}`,
  );
}
const stiffRest = restPoint(circuitOf({ 'tuned circuit.loaded Q': '40' }));
{
  const laws = new TableStore().lawsFor(stiffRest, 1);
  const took = await medianSeconds(3, () => {
    renderClip(stiffRest, laws, programme, clip.sampleRateHertz);
  });
  say(
    'render, resistor, stiff source, 60 mV',
    `${(seconds / took).toFixed(0)} × real time`,
    `${((everyCycle * seconds) / took).toFixed(0)}`,
  );
  const ode = await againstOde(stiffRest, 1e-4);
  say(
    'the same equations by a general-purpose ODE package, per second of programme',
    `${ode.odeSeconds.toFixed(0)} s, ${(ode.odeSeconds / ode.rendererSeconds).toFixed(0)} × the renderer's`,
    `error ${ode.odeDecibels.toFixed(4)} dB, renderer ${ode.rendererDecibels.toFixed(4)} dB`,
  );
}
for (const length of [1, 10, 60, 600]) {
  const stretch = Float64Array.from({ length: length * 48_000 }, (_, n) => programme[n % programme.length] as number);
  const laws = new TableStore().lawsFor(stiffRest, 1);
  const took = await medianSeconds(3, () => {
    renderClip(stiffRest, laws, stretch, 48_000);
  });
  say(`render ${length} s`, `${(length / took).toFixed(0)} × real time`);
}

{
  const rest = restPoint(circuitOf({ 'plate.load': 'transformer 1:3', 'detector.tube': '76' }));
  const laws = new TableStore().lawsFor(rest, 1);
  const { share, dry, playedSeconds } = await listenPaced({ rest, laws, modulation: programme, gain: 1 }, 48_000, 60);
  say(
    `listen, transformer, tuned circuit, ${playedSeconds.toFixed(0)} s at the pace of the clock`,
    `${(100 * share).toFixed(1)} % of a core, ran dry ${dry} times`,
  );
}

const folder = mkdtempSync(join(tmpdir(), 'presolder-bench-'));
const run = (...args: string[]) =>
  medianClockSeconds(5, () => void spawnSync(process.execPath, [command, ...args], { cwd: folder }));
say('--help, whole process', `${(1000 * (await run('--help'))).toFixed(0)} ms`);
say('respond, whole process', `${(1000 * (await run('respond'))).toFixed(0)} ms`);
const whole = await run('render', clipPath, '--out', 'one', '--quiet');
say('render one variant, whole process, files included', `${(seconds / whole).toFixed(0)} × real time`);
for (const count of [2, 4, 8, 24]) {
  const bypasses = Array.from({ length: count }, (_, k) => `${50 + 10 * k}p`).join();
  const took = await run('render', clipPath, '--bypass', bypasses, '--out', `set ${count}`, '--quiet');
  say(`render ${count} variants, whole process, a variant`, `${((count * seconds) / took).toFixed(0)} × real time`);
}
say('spread, 500 circuits, whole process', `${(await run('spread', '--runs', '500')).toFixed(1)} s`);
{
  // half an hour in stereo, two swelling tones apart
  const half = 1800 * 48_000;
  const channel = (hertz: number): Float32Array =>
    Float32Array.from(
      { length: half },
      (_, n) => 0.4 * Math.sin((n * 2 * Math.PI * hertz) / 48_000) * Math.sin(n / 7919),
    );
  const stereo = WavEncoder.encode.sync(
    { sampleRate: 48_000, channelData: [channel(440), channel(1234)] },
    { bitDepth: 16, float: false, symmetric: true },
  );
  writeFileSync(join(folder, 'half-hour.wav'), new Uint8Array(stereo));
  const peak = "process.on('exit',()=>console.error('peak',process.resourceUsage().maxRSS))";
  const from = performance.now();
  const { stderr } = spawnSync(
    process.execPath,
    ['--import', `data:text/javascript,${peak}`, command, 'render', 'half-hour.wav', '--out', 'half', '--quiet'],
    { cwd: folder, encoding: 'utf8' },
  );
  const kilobytes = Number(/peak (\d+)/.exec(stderr)?.[1]);
  say(
    'render 30 min in stereo, whole process',
    `${(1800 / ((performance.now() - from) / 1000)).toFixed(0)} × real time, ${(kilobytes / 1024).toFixed(0)} MB at most`,
  );
}
rmSync(folder, { recursive: true, force: true });

const lines = [
  `Node ${process.version}, ${cpus().length} × ${cpus()[0]?.model ?? 'unknown processor'}`,
  '',
  '| what (processor time; whole processes by the clock) | figure | every cycle = 1 |',
  '| --- | ---: | ---: |',
  ...rows.map((row) => `| ${row.join(' | ')} |`),
];
process.stdout.write(`${lines.join('\n')}\n`);
