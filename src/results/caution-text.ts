import type { Caution } from '../engine/circuits/cautions.ts';
import { formatQuantity } from '../engine/parts/format-quantity.ts';
import { preferredAbove } from '../engine/parts/preferred-values.ts';

const PRACTICE = 'common practice, no source';
const MEASURED = 'measured against the integration of every carrier cycle';
const volts = (value: number): string => formatQuantity(value, 'voltage');
const farads = (value: number, digits = 3): string => formatQuantity(value, 'capacitance', digits);
const hertz = (value: number): string => formatQuantity(value, 'frequency', 3);
const percent = (share: number, digits = 2): string => `${Number((100 * share).toPrecision(digits))} %`;
const rating = (watts: number): string => (watts === 0.25 ? '1/4 W' : watts === 0.5 ? '1/2 W' : `${watts} W`);

/** The sentence of a caution: the figure, the limit, where the limit comes from, and what to do. */
export function cautionText(caution: Caution): string {
  return dangerText(caution) ?? partText(caution) ?? signalText(caution) ?? validityText(caution);
}

function dangerText({ code, figure, limit }: Caution): string | null {
  switch (code) {
    case 'shock':
      return (
        `${volts(figure)} supply: such voltages can shock or kill, and capacitors stay charged after switching off. ` +
        'A line-powered or transformerless chassis can be live. Work on it belongs to people licensed or competent ' +
        `for it, under local codes; switch off and discharge first. (Shown from ${volts(limit)}: ${PRACTICE}.)`
      );
    case 'phones-in-plate':
      return (
        `Phones in the plate lead: the ${volts(figure)} of the supply is on the wearer's head, one fault of insulation ` +
        `away (shown above ${volts(limit)}: ${PRACTICE}). Isolate them: a choke or transformer as the load, the phones ` +
        'behind a capacitor.'
      );
    default:
      return null;
  }
}

function partText({ code, figure, limit, further = 0, name = '', source }: Caution): string | null {
  const printed = source === undefined ? '' : ` (${source})`;
  switch (code) {
    case 'plate-volts':
      return `Plate at ${volts(figure)}, over the published limit of ${volts(limit)}${printed}: lower the supply or raise the plate load.`;
    case 'plate-watts':
      return `Plate dissipates ${figure.toFixed(2)} W, over the published limit of ${limit.toFixed(2)} W${printed}: lower the supply or raise the plate load.`;
    case 'resistor-watts': {
      const fit =
        further > 0
          ? `fit one of ${rating(further)}, the next standard rating with a margin of two`
          : 'more than half of 5 W: divide it over several resistors, or lower the supply';
      return (
        `The ${name} turns ${formatQuantity(figure, 'power', 3)} into heat, over the ${formatQuantity(limit, 'power', 3)} that ` +
        `a 1/4 W resistor stands with a margin of two (${PRACTICE}): ${fit}.`
      );
    }
    case 'winding-amps':
      return (
        `${formatQuantity(figure, 'current', 3)} of direct current through the ${name}, over the ${formatQuantity(limit, 'current', 3)} ` +
        `it is made for${printed || ` (${PRACTICE})`}: the core saturates and bass goes. Lower the supply, take a tube that draws ` +
        'less, or feed the winding through a resistor and a capacitor.'
      );
    case 'battery-life':
      return (
        `The supply gives ${formatQuantity(figure, 'current', 3)}: a B battery of ${formatQuantity(limit, 'current', 3)}h lasts ` +
        `about ${formatQuantity(Number(further.toPrecision(2)), 'number')} hours of use (capacity over current: ${PRACTICE}; age and ` +
        'cold take their share). A higher plate load or a lower supply stretches it.'
      );
    case 'next-grid-volts':
      return (
        `The coupling capacitor leaks ${volts(figure)} onto the next grid, where ${volts(limit)} would already show ` +
        `(a tenth of a small stage's bias: ${PRACTICE}): that tube runs hot and distorts. Replace the capacitor.`
      );
    default:
      return null;
  }
}

function signalText({ code, figure, limit, further = 0 }: Caution): string | null {
  switch (code) {
    case 'small-grid-capacitor':
      return (
        `Grid capacitor of ${farads(figure)}, below ten times what the grid takes at the carrier, ${farads(limit)} ` +
        `(${PRACTICE}): the two divide the carrier, and ${further.toFixed(1)} dB of it is lost. ` +
        `${farads(preferredAbove(limit, 'E12'))} would do, or more plate bypass, which lets the plate multiply the grid's less.`
      );
    case 'slope-limit':
      return (
        `The detector follows the stated modulation only up to ${hertz(figure)}, short of the ${hertz(limit)} that a ` +
        `programme's strong peaks reach (${PRACTICE}); at ${hertz(limit)} it follows ${percent(Math.min(further, 1))}. Beyond, ` +
        `it cuts across the troughs (diagonal clipping). Bring leak × capacitor down ${(limit / figure).toFixed(1)} times.`
      );
    case 'peak-clipping':
      return (
        `The diode follows ${percent(figure)} modulation, short of the ${percent(limit)} stated: what its load feeds takes so ` +
        "much of the audio that the troughs are cut (F. E. Terman, Radio Engineers' Handbook, 1943, from memory). Feed a " +
        'higher resistance, or take a lower diode load.'
      );
    case 'carrier-on-plate':
      return (
        `${volts(Number(figure.toPrecision(2)))} of carrier, rms, goes on to the next grid, over the ${volts(limit)} at which that grid ` +
        `begins to detect (${PRACTICE}). A plate bypass of about ${farads(further)}, or a carrier choke, keeps it back.`
      );
    case 'bypass-inaudible':
      return (
        `The plate bypass costs ${figure.toFixed(1)} dB at 5 kHz (under 0.5 dB: ${PRACTICE}) and the load with what it feeds ` +
        `${limit.toFixed(1)} dB: another bypass makes no audible difference here; change what the plate feeds first.`
      );
    case 'limited':
      return (
        `The transmitter's limiter held ${figure} samples at −100 % modulation, below which no carrier goes: set the ` +
        'modulation to 100 % or less to avoid it.'
      );
    case 'unsettled':
      return (
        `At ${figure} moments of a clip of ${limit} samples the voltages did not settle: what is heard there is not to ` +
        'be relied on. Bring level and parts nearer to usual ones, or render with --quality fine.'
      );
    default:
      return null;
  }
}

function validityText({ code, figure, limit }: Caution): string {
  switch (code) {
    case 'ripple':
      return (
        `Carrier × resistance × capacitance of what the detector charges is ${figure.toFixed(1)}, below ${limit} (${MEASURED}): the ` +
        "carrier's ripple there is no longer small and the figures can be off by a few tenths of a decibel. A larger leak " +
        'or grid capacitor, or of others their load or bypass, mends it.'
      );
    case 'plate-harmonic':
      return (
        `The plate's second carrier harmonic reaches ${percent(figure)} of the carrier in the tube (limit ${percent(limit)}, ` +
        `${MEASURED}): levels are good to 0.3 dB at best, and a second harmonic can be off by more than a tenth of itself. ` +
        'More plate bypass or less signal mends it.'
      );
    case 'bare-plate':
      return (
        `Hardly any plate bypass, and the plate's second carrier harmonic reaches ${percent(figure)} of the carrier in the ` +
        `tube (limit ${percent(limit)} there, ${MEASURED}): levels are good to 0.3 dB, and a second harmonic of a few per cent ` +
        'can be off by more than a tenth of itself. More plate bypass or less signal mends it.'
      );
    case 'little-bypass':
      return (
        `Plate bypass and strays are ${farads(figure, 4)}, below ${farads(limit)} (${MEASURED}), at more than 100 mV of ` +
        'carrier: levels are good to 0.3 dB and second harmonic to 10 % here. More plate bypass or less signal mends it.'
      );
    case 'slow-carrier':
      return (
        `Carrier of ${hertz(figure)}, below ${hertz(limit)}, ten times the highest audio (${PRACTICE}): averaging over its ` +
        'cycles is doubtful. Look at the lower half of the response only, or raise the carrier.'
      );
    case 'outside-rows':
      return (
        `Supply of ${volts(figure)}, more than twice away from the tube's published rows (nearest ${volts(limit)}): its law is ` +
        'stretched there, and currents can be off by 20 to 35 % (the published rows against each other). A row of the ' +
        "tube's own at such a voltage, under tube: rows, mends it."
      );
    default:
      return (
        "A textbook law stands in place of the tube's own: the plate is made straight about its rest point, and real " +
        'overload does not show. Write law: tube for the tube itself.'
      );
  }
}
