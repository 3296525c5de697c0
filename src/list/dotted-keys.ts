import * as z from 'zod';
import { nearestName } from '../engine/parts/nearest-name.ts';

/** The schema under its default or under being optional. */
export function unwrapped(schema: z.core.$ZodType): z.core.$ZodType {
  let inner = schema;
  while (inner instanceof z.ZodPrefault || inner instanceof z.ZodOptional) inner = inner.unwrap();
  return inner;
}

/** The keys of a mapping, where the schema is one, or where it is one in another way of writing (a load). */
export function mappingShape(schema: z.core.$ZodType): Readonly<Record<string, z.core.$ZodType>> | null {
  const inner = unwrapped(schema);
  if (inner instanceof z.ZodObject) return inner.shape;
  if (inner instanceof z.ZodPipe) return mappingShape(inner.in);
  if (inner instanceof z.ZodUnion) {
    const shapes = inner.options.map(mappingShape).filter((shape) => shape !== null);
    // the first option's wording of a key stands for all
    return shapes.length === 0 ? null : Object.assign({}, ...shapes.reverse());
  }
  return null;
}

/**
 * All keys of a shape as they are written in a variant or after `--set`: `plate.bypass`, `tuned circuit.unloaded Q`. A
 * section itself is no key; a load is one, and so are its own values. The fields come without their defaults.
 */
export function dottedFields(shape: Readonly<Record<string, z.core.$ZodType>>, prefix = ''): Map<string, z.ZodType> {
  const fields = new Map<string, z.ZodType>();
  for (const [key, schema] of Object.entries(shape)) {
    const inner = unwrapped(schema);
    const nested = mappingShape(schema);
    if (!(inner instanceof z.ZodObject)) fields.set(prefix + key, inner as z.ZodType);
    if (nested) for (const [name, field] of dottedFields(nested, `${prefix}${key}.`)) fields.set(name, field);
  }
  return fields;
}

/** The known dotted key most like what was typed: by the whole key, else by its last part. */
export function nearestKey(typed: string, known: readonly string[]): string | null {
  // no key is half as long: nothing can be near
  if (typed.length > 100) return null;
  const whole = nearestName(typed, known);
  if (whole !== null) return whole;
  const last = (key: string): string => key.slice(key.lastIndexOf('.') + 1);
  const part = nearestName(last(typed), known.map(last));
  return part === null ? null : (known.find((key) => last(key) === part) ?? null);
}
