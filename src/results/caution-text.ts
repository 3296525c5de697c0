import type { Caution } from '../engine/circuits/cautions.ts';
import { formatQuantity } from '../engine/parts/format-quantity.ts';

const volts = (value: number): string => formatQuantity(value, 'voltage');

/** The sentence of a caution: the figure, the limit, where the limit comes from, and what to do. */
export function cautionText({ code, figure, limit }: Caution): string {
  switch (code) {
    case 'shock':
      return (
        `${volts(figure)} supply: such voltages can shock or kill, and capacitors stay charged after switching off. ` +
        'A line-powered or transformerless chassis can be live. Work on it belongs to people licensed or competent ' +
        `for it, under local codes. (Shown from ${volts(limit)}: common practice, no source.)`
      );
    case 'plate-volts':
      return `Plate at ${volts(figure)}, over the published limit of ${volts(limit)}: lower the supply or raise the plate load.`;
    case 'plate-watts':
      return `Plate dissipates ${figure.toFixed(2)} W, over the published limit of ${limit.toFixed(2)} W: lower the supply or raise the plate load.`;
    case 'ripple':
      return (
        `Carrier × leak × grid capacitor is ${figure.toFixed(1)}, below ${limit}: the carrier's ripple on the grid is no ` +
        'longer small and the figures here can be off by a few tenths of a decibel. A larger leak or grid capacitor mends it.'
      );
    case 'plate-harmonic':
      return (
        `The plate's second carrier harmonic reaches ${(100 * figure).toFixed(0)} % of the carrier in the tube (limit ` +
        `${(100 * limit).toFixed(0)} %): distortion figures are good to 10 % only. More plate bypass or less signal mends it.`
      );
    case 'little-bypass':
      return (
        `Plate bypass and strays are ${formatQuantity(figure, 'capacitance')}, below ${formatQuantity(limit, 'capacitance')}, at more than ` +
        '100 mV of carrier: levels are good to 0.3 dB and second harmonic to 10 % here.'
      );
    case 'slow-carrier':
      return (
        `Carrier of ${formatQuantity(figure, 'frequency')} is less than ten times the highest audio: averaging over the carrier ` +
        `is doubtful below ${formatQuantity(limit, 'frequency')}.`
      );
    case 'outside-rows':
      return (
        `Supply of ${volts(figure)} lies outside the tube's published rows (nearest ${volts(limit)}): the tube's law is ` +
        'stretched there; expect currents within 20 to 35 %.'
      );
    case 'bypass-inaudible':
      return (
        `The plate bypass costs ${figure.toFixed(1)} dB at 5 kHz and the load with what it feeds ${limit.toFixed(1)} dB: ` +
        'another bypass makes no audible difference here; change what the plate feeds first.'
      );
    case 'textbook':
      return (
        "A textbook law stands in place of the tube's own: the plate is made straight about its rest point and real " +
        'overload does not show.'
      );
    case 'limited':
      return `The transmitter's limiter held ${figure} samples at −100 % modulation: modulation is set above 100 %.`;
  }
}
