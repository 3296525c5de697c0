import { InputError } from '../errors.ts';
import { nearestName } from '../parts/nearest-name.ts';
import { BATTERY_TUBES } from './catalogue-battery.ts';
import { HIGH_MU_TUBES } from './catalogue-heater-high.ts';
import { MEDIUM_MU_TUBES } from './catalogue-heater-medium.ts';
import type { TubeType } from './tube-type.ts';

/** Every tube type with published rows, battery tubes first. */
export const TUBE_TYPES: readonly TubeType[] = [...BATTERY_TUBES, ...MEDIUM_MU_TUBES, ...HIGH_MU_TUBES];

/** Letters only, no separators: `6sl7 gt`, `6SL7-GT` and `6SL7GT` are one. */
function plainName(name: string): string {
  return name.toUpperCase().replace(/[\s\-_/.]/g, '');
}

/** Envelope letters of the octal and lock-in series (G, GT, GTA, GTB, GTY, W…) do not change the tube. */
function withoutEnvelope(plain: string): string {
  return plain.replace(/(?<=\d)(G|GT|GTA|GTB|GTY|WGT|WGTA|WGTB)$/, '');
}

/**
 * The tube type of that name: case, spaces, hyphens and envelope letters are tolerated, other names accepted.
 *
 * @throws InputError `unknown-tube` with the nearest known name as its hint
 */
export function findTube(name: string, where = 'detector.tube'): TubeType {
  const wanted = plainName(name);
  const names = (type: TubeType): string[] => [type.name, ...type.otherNames].map(plainName);
  const exact = TUBE_TYPES.find((type) => names(type).includes(wanted));
  if (exact) return exact;
  const bare = withoutEnvelope(wanted);
  const tolerant = TUBE_TYPES.find((type) => names(type).some((known) => withoutEnvelope(known) === bare));
  if (tolerant) return tolerant;
  const suggestion = nearestName(
    name,
    TUBE_TYPES.flatMap((type) => [type.name, ...type.otherNames]),
  );
  throw new InputError({
    code: 'unknown-tube',
    where,
    got: name,
    expected: `a tube of the catalogue: ${TUBE_TYPES.map((type) => type.name).join(', ')}`,
    ...(suggestion === null ? {} : { hint: `nearest: ${suggestion}` }),
  });
}
