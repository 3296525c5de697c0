import { formatQuantity } from '../engine/parts/format-quantity.ts';
import { gatherCautions, gatheredText } from '../results/caution-list.ts';
import { COST_PARTS } from '../results/cost-parts.ts';
import type { Result, VariantResult } from '../results/result.ts';
import { plainTable } from './plain-table.ts';

const hertz = (value: number | null): string => (value === null ? '-' : formatQuantity(value, 'frequency', 3));
const signed = (value: number): string => `${value > 0 ? '+' : ''}${value.toFixed(1)} dB`;
const at = (variant: VariantResult, frequency: number) => variant.response.find((row) => row.hertz === frequency);

/** What a builder wants first: level, treble, corner, distortion and where the treble went, a row a variant. */
export function summaryText(result: Result): string {
  const loudest = Math.max(...result.variants.map((variant) => at(variant, 400)?.voltsRmsAt30Percent ?? 0));
  const rows = result.variants.map((variant) => {
    const level = at(variant, 400)?.voltsRmsAt30Percent ?? 0;
    const tone = variant.distortion.find((row) => row.hertz === 400 && row.modulationPercent === 80);
    return [
      variant.name,
      formatQuantity(level, 'voltage', 3),
      loudest > 0 && level > 0 ? signed(20 * Math.log10(level / loudest)) : '-',
      signed(at(variant, 5000)?.decibels ?? 0),
      hertz(variant.highCornerHertz),
      `${(tone?.secondPercent ?? 0).toFixed(1)} %`,
      variant.rest.plateVolts > 0 ? formatQuantity(variant.rest.plateVolts, 'voltage', 3) : '-',
      variant.circuit.tunedCircuit.loadedQ.toFixed(0),
    ];
  });
  const heads = ['variant', 'audio', 're loudest', '5 kHz', '-3 dB at', '2nd, 80 %', 'plate', 'loaded Q'];
  const costs = result.variants.map((variant) => [
    variant.name,
    ...COST_PARTS.map(({ key }) => signed(at(variant, 5000)?.cost[key] ?? 0)),
  ]);
  return [
    plainTable(heads, rows),
    '',
    'audio: 400 Hz at 30 % modulation; 5 kHz: re 400 Hz.',
    '',
    'What would come back at 5 kHz if one part alone were ideal:',
    plainTable(['variant', ...COST_PARTS.map(({ name }) => name)], costs),
    '',
    ...measuredLines(result),
    ...cautionLines(result),
  ].join('\n');
}

/** How far each variant is from the readings. */
function measuredLines({ measured, variants }: Result): string[] {
  if (!measured) return [];
  const apart = variants.map(
    (variant) => `${variant.name} ${(variant.measured?.rmsDifferenceDecibels ?? 0).toFixed(2)} dB`,
  );
  return [`From ${measured.file}, rms over ${measured.points.length} readings: ${apart.join(', ')}.`, ''];
}

/** Each caution once, with the variants it concerns when it does not concern all. */
function cautionLines(result: Result): string[] {
  return gatherCautions(result.variants).map((caution) => {
    const who = caution.names.length === 0 ? '' : ` (${caution.names.join(', ')})`;
    return `Caution${who}: ${gatheredText(caution)}`;
  });
}
