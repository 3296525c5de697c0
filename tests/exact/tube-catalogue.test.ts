import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { findTube, TUBE_TYPES } from '../../src/engine/tubes/catalogue.ts';
import { ownTube } from '../../src/engine/tubes/own-tube.ts';
import { SOCKET_STRAYS, tubeFromCatalogue } from '../../src/engine/tubes/socketed-tube.ts';
import { adviseLeakReturn, leakReturnVolts } from '../../src/engine/tubes/tube-type.ts';

function faults(run: () => unknown) {
  try {
    run();
  } catch (error) {
    if (error instanceof InputError) return error.faults;
    throw error;
  }
  return [];
}

describe('tube names', () => {
  it.each([
    ['6SL7-GT', '6SL7-GT'],
    ['6sl7 gt', '6SL7-GT'],
    ['6SL7GT', '6SL7-GT'],
    ['6SL7', '6SL7-GT'],
    ['6SN7GTB', '6SN7-GT'],
    ['ecc83', '12AX7'],
    ['ECC82', '12AU7'],
    ['12AX7A', '12AX7'],
    ['1H4-G', '30'],
    ['UX-201A', '01-A'],
    ['01a', '01-A'],
    ['57', '6J7 triode-connected'],
    ['6C6', '6J7 triode-connected'],
    ['12SQ7', '6SQ7'],
  ])('%s is the %s', (typed, name) => {
    expect(findTube(typed).name).toBe(name);
  });

  it('never gives one name to two types', () => {
    const names = TUBE_TYPES.flatMap((type) => [type.name, ...type.otherNames]).map((n) =>
      n.toUpperCase().replace(/[\s-]/g, ''),
    );
    expect(new Set(names).size).toBe(names.length);
  });

  it('suggests the nearest name, and none where none is near', () => {
    expect(faults(() => findTube('12AX8'))[0]).toMatchObject({
      code: 'unknown-tube',
      got: '12AX8',
      hint: 'nearest: 12AX7',
    });
    expect(faults(() => findTube('6S7L-GT'))[0]?.hint).toBe('nearest: 6SL7-GT');
    expect(faults(() => findTube('magic eye'))[0]?.hint).toBeUndefined();
  });
});

describe('a tube in its socket', () => {
  it('takes the row nearest the supply, or the one that is named', () => {
    expect(tubeFromCatalogue('12AX7', { supplyVolts: 90, strays: SOCKET_STRAYS }).row.plateVolts).toBe(100);
    expect(
      tubeFromCatalogue('12AX7', { supplyVolts: 90, rowPlateVolts: 250, strays: SOCKET_STRAYS }).row.plateVolts,
    ).toBe(250);
    expect(
      faults(() => tubeFromCatalogue('12AX7', { supplyVolts: 90, rowPlateVolts: 180, strays: SOCKET_STRAYS }))[0],
    ).toMatchObject({ code: 'unknown-row', expected: 'the plate voltage of a published row: 100 V, 250 V' });
  });

  it('adds the strays to the capacitances of the tube', () => {
    const { tube, type } = tubeFromCatalogue('6SL7', {
      supplyVolts: 90,
      strays: { gridPlateFarads: 1e-12, gridCathodeFarads: 2e-12, plateCathodeFarads: 4e-12 },
    });
    expect(tube.gridPlateFarads).toBe(type.capacitances.gridPlateFarads + 1e-12);
    expect(tube.gridCathodeFarads).toBe(type.capacitances.gridCathodeFarads + 2e-12);
    expect(tube.plateCathodeFarads).toBe(type.capacitances.plateCathodeFarads + 4e-12);
  });

  it('refuses impossible surroundings, all at once', () => {
    const strays = { ...SOCKET_STRAYS, gridPlateFarads: -1e-12 };
    expect(faults(() => tubeFromCatalogue('6SL7', { supplyVolts: Number.NaN, strays })).map((f) => f.code)).toEqual([
      'not-a-supply',
      'stray-negative',
    ]);
  });

  it('returns the leak of battery tubes to filament plus, of heater tubes to the cathode', () => {
    expect(adviseLeakReturn(findTube('30').cathode)).toBe('filament +');
    expect(adviseLeakReturn(findTube('01-A').cathode)).toBe('filament +');
    expect(adviseLeakReturn(findTube('27').cathode)).toBe('cathode');
    expect(leakReturnVolts('filament oxide', 2, 'filament +')).toBe(2);
    expect(leakReturnVolts('filament oxide', 2, 'filament -')).toBe(0);
    expect(leakReturnVolts('heater oxide', 6.3, 'cathode')).toBe(0);
    expect(leakReturnVolts('heater oxide', 6.3, 'filament +')).toBeNull();
  });
});

describe('a tube from a builder’s own rows', () => {
  const spec = {
    type: 'from my shelf',
    cathode: 'heater oxide',
    heaterVolts: 6.3,
    rows: [{ plateVolts: 250, gridVolts: -2, plateAmps: 2.3e-3, mu: 70, siemens: 1600e-6, plateOhms: 44000 }],
    gridPlateFarads: 2.8e-12,
    gridCathodeFarads: 3e-12,
    plateCathodeFarads: 3.8e-12,
    supplyVolts: 250,
    strays: SOCKET_STRAYS,
  } as const;

  it('is the same as the catalogue’s from the same row', () => {
    const { law } = tubeFromCatalogue('6SL7-GT', { supplyVolts: 250, strays: SOCKET_STRAYS }).tube;
    const own = ownTube(spec);
    // the catalogue's row is made from mA and µmho, so it may differ in the last bit
    for (const key of ['G', 'phi', 'mu', 'Gg', 'Cg'] as const) expect(own.tube.law[key] / law[key]).toBeCloseTo(1, 12);
    expect(own.cautions).toEqual([]);
  });

  it('works out the one number of three that a sheet leaves out', () => {
    const { mu: _, ...without } = spec.rows[0];
    expect(ownTube({ ...spec, rows: [without] }).tube.law.mu).toBeCloseTo(70.4, 9);
  });

  it.each([
    ['no rows', { rows: [] }, 'no-rows'],
    [
      'two of three numbers missing',
      { rows: [{ plateVolts: 250, gridVolts: -2, plateAmps: 2e-3, mu: 70 }] },
      'row-incomplete',
    ],
    ['mu that does not fit', { rows: [{ ...spec.rows[0], mu: 90 }] }, 'row-inconsistent'],
    ['a current of nothing', { rows: [{ ...spec.rows[0], plateAmps: 0 }] }, 'row-not-positive'],
    ['a bias that is no number', { rows: [{ ...spec.rows[0], gridVolts: Number.NaN }] }, 'row-not-positive'],
    ['a negative capacitance', { gridPlateFarads: -1e-12 }, 'capacitance-negative'],
    ['no heater', { heaterVolts: 0 }, 'heater-not-positive'],
  ])('refuses %s', (_, change, code) => {
    expect(faults(() => ownTube({ ...spec, ...change })).map((f) => f.code)).toEqual([code]);
  });

  it('cautions a row whose bias has lost its sign', () => {
    expect(ownTube({ ...spec, rows: [{ ...spec.rows[0], gridVolts: 2 }] }).cautions[0]?.code).toBe(
      'contact-potential-unlikely',
    );
  });
});
