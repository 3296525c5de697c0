import { restPoint } from '../../engine/circuits/rest-point.ts';
import { InputError } from '../../engine/errors.ts';
import { formatQuantity } from '../../engine/parts/format-quantity.ts';
import { parseQuantity } from '../../engine/parts/quantities.ts';
import { PROOF_TONE_STEP_HERTZ, proveTone, type ToneProof } from '../../engine/proof/tone-proof.ts';
import { TableStore } from '../../engine/renderer/table-store.ts';
import { EXIT, type Io } from '../io.ts';
import { variantsFrom } from '../list-input.ts';
import { ofVariant } from '../of-variant.ts';
import { flag, type RawOptions, text } from '../options.ts';
import { plainTable } from '../plain-table.ts';
import { Progress } from '../progress.ts';

/** Carrier cycles a period of the tone that the reference asks for. */
const LEAST_CARRIER_CYCLES = 10;

interface VariantProof {
  readonly variant: string;
  readonly levelVoltsRms: number;
  readonly tones: readonly ToneProof[];
}

/** The list's circuits through the carrier-cycle reference and the renderer, tone by tone, and whether they agree. */
export async function prove(list: string | null, options: RawOptions, io: Io): Promise<number> {
  const tones = commaValues(text(options, 'tones') ?? '50,400,2500,10000', '--tones', readTone);
  const depths = commaValues(text(options, 'depths') ?? '30,80', '--depths', readDepth);
  const variants = await variantsFrom(list, options);
  if (variants.some(({ circuit }) => circuit.station.levelVoltsRms === 0)) {
    throw new InputError({
      code: 'no-carrier',
      where: 'station.level',
      got: '0 V',
      expected: 'a carrier: with none there is nothing to compare',
    });
  }
  const slowest = Math.min(...variants.map(({ circuit }) => circuit.station.carrierHertz));
  for (const hertz of tones) {
    if (hertz <= slowest / LEAST_CARRIER_CYCLES) continue;
    throw new InputError({
      code: 'tone-near-carrier',
      where: '--tones',
      got: formatQuantity(hertz, 'frequency'),
      expected: `at most a tenth of the carrier, ${formatQuantity(slowest / LEAST_CARRIER_CYCLES, 'frequency')}`,
    });
  }
  const quiet = flag(options, 'quiet');
  const json = flag(options, 'json');
  const progress = new Progress(io, quiet);
  const tables = new TableStore();
  const proofs: VariantProof[] = [];
  const total = variants.length * tones.length * depths.length;
  let done = 0;
  for (const { name, circuit } of variants) {
    const rest = ofVariant(name, () => restPoint(circuit));
    const laws = tables.lawsFor(rest, 1);
    const found: ToneProof[] = [];
    for (const hertz of tones) {
      for (const depth of depths) {
        const what = `${name}, ${formatQuantity(hertz, 'frequency')} at ${Math.round(100 * depth)} %`;
        const told = (part: number): void => progress.tell(what, (done + part) / total);
        found.push(ofVariant(name, () => proveTone(rest, laws, hertz, depth, told)));
        done++;
        await progress.breathe();
      }
    }
    proofs.push({ variant: name, levelVoltsRms: circuit.station.levelVoltsRms, tones: found });
  }
  progress.clear();
  const holds = proofs.every((proof) => proof.tones.every((tone) => tone.holds));
  if (json) io.out(`${JSON.stringify({ format: 'presolder-proof/1', holds, variants: proofs }, null, 2)}\n`);
  else io.out(`${proofText(proofs, holds)}\n`);
  return holds ? EXIT.done : EXIT.notMet;
}

function proofText(proofs: readonly VariantProof[], holds: boolean): string {
  const heads = [
    'tone',
    'depth',
    'every cycle',
    'renderer',
    'apart',
    'limit',
    '2nd: every cycle',
    'renderer',
    '3rd: every cycle',
    'renderer',
    '',
  ];
  const parts = proofs.map(({ variant, levelVoltsRms, tones }) => {
    const rows = tones.map((tone) => [
      formatQuantity(tone.hertz, 'frequency'),
      `${Math.round(100 * tone.modulation)} %`,
      formatQuantity(tone.reference.fundamentalVoltsRms, 'voltage', 4),
      formatQuantity(tone.rendered.fundamentalVoltsRms, 'voltage', 4),
      `${signed(tone.decibels, 4)} dB`,
      `${tone.limits.decibels} dB`,
      `${tone.reference.secondPercent.toFixed(3)} %`,
      `${tone.rendered.secondPercent.toFixed(3)} %`,
      `${tone.reference.thirdPercent.toFixed(3)} %`,
      `${tone.rendered.thirdPercent.toFixed(3)} %`,
      tone.holds ? 'holds' : 'FAILS',
    ]);
    return `${variant}, carrier ${formatQuantity(levelVoltsRms, 'voltage')}\n${plainTable(heads, rows)}\n`;
  });
  const worst = Math.max(...proofs.flatMap((proof) => proof.tones.map((tone) => Math.abs(tone.decibels))));
  return `${parts.join('\n')}
Second harmonic: within 3 % of its value from 0.5 % up, else within 0.02 % of the fundamental (10 % and 0.05 % where little bypass meets a strong carrier).
${holds ? 'All hold' : 'NOT all hold'}; largest difference of a fundamental ${worst.toFixed(4)} dB.`;
}

const signed = (value: number, digits: number): string => `${value < 0 ? '' : '+'}${value.toFixed(digits)}`;

function commaValues(written: string, where: string, read: (one: string, where: string) => number): number[] {
  return written.split(',').map((one) => read(one.trim(), where));
}

function readTone(written: string, where: string): number {
  const hertz = parseQuantity(written, 'frequency', where, { atLeast: PROOF_TONE_STEP_HERTZ, atMost: 16_000 });
  if (hertz % PROOF_TONE_STEP_HERTZ === 0) return hertz;
  throw new InputError({
    code: 'uneven-tone',
    where,
    got: written,
    expected: `multiples of ${PROOF_TONE_STEP_HERTZ} Hz`,
    hint: 'whole periods then fit the measured stretch',
  });
}

/** A depth: `80 %`, or a bare number in percent as the flag says. */
function readDepth(written: string, where: string): number {
  const percent = /^[\d.]+$/.test(written) ? `${written} %` : written;
  return parseQuantity(percent, 'fraction', where, { atLeast: 0.001, atMost: 1 });
}
