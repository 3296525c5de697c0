import type { Phones } from './circuit.ts';
import { type Complex, complex, magnitude, over, plus } from './complex.ts';
import type { Network } from './network.ts';
import type { Heard } from './output-stage.ts';

/** Frequency at which phones are taken for an impedance, Hz. */
const PHONES_HERTZ = 400;

/**
 * Stamps phones between two points. What is heard is the force on the diaphragm, so the output is the coil's current
 * times the phones' impedance at 400 Hz.
 *
 * @param perfect  for the cost by part: a plain resistance of that impedance
 */
export function stampPhones(network: Network, high: number, low: number, phones: Phones, perfect: boolean): Heard {
  const ohms = magnitude(phonesImpedance(phones, PHONES_HERTZ));
  if (perfect) return { kind: 'branch', branch: network.inductor(high, low, 0, ohms), ohms };
  network.capacitor(high, low, phones.selfFarads ?? 0);
  let top = high;
  if (phones.resonanceOhms !== null && phones.resonanceHenries !== null && phones.resonanceFarads !== null) {
    top = network.node();
    network.resistor(high, top, phones.resonanceOhms);
    network.inductor(high, top, phones.resonanceHenries);
    network.capacitor(high, top, phones.resonanceFarads);
  }
  const coil = network.node();
  network.inductor(top, coil, phones.henries);
  if (phones.eddyLossOhms !== null) network.resistor(top, coil, phones.eddyLossOhms);
  return { kind: 'branch', branch: network.inductor(coil, low, 0, phones.dcOhms), ohms };
}

/** Impedance of the phones at one frequency, ohms. */
export function phonesImpedance(phones: Phones, hertz: number): Complex {
  const omega = 2 * Math.PI * hertz;
  const parallel = (siemens: number, henries: number, farads: number): Complex =>
    over(complex(1), complex(siemens, omega * farads - 1 / (omega * henries)));
  let series = plus(
    complex(phones.dcOhms),
    parallel(1 / (phones.eddyLossOhms ?? Number.POSITIVE_INFINITY), phones.henries, 0),
  );
  if (phones.resonanceOhms !== null && phones.resonanceHenries !== null && phones.resonanceFarads !== null) {
    series = plus(series, parallel(1 / phones.resonanceOhms, phones.resonanceHenries, phones.resonanceFarads));
  }
  const across = over(complex(1), series);
  return over(complex(1), complex(across.re, across.im + omega * (phones.selfFarads ?? 0)));
}
