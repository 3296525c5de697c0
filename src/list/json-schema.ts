import * as z from 'zod';
import { circuitShape, partsList } from './schema.ts';

/**
 * The parts list's JSON Schema (draft 2020-12), made from the definition that the program checks lists with, so that an
 * editor can complete and check one. Defaults are shown as they are written.
 */
export function partsListSchema(): Record<string, unknown> {
  const air = circuitShape['on the air'].unwrap().shape;
  const onOneLine: readonly z.core.$ZodType[] = [
    circuitShape.output.unwrap().shape.matching.unwrap(),
    ...[air['second station'], air.static, air['beat oscillator'], air.morse].map((section) => section.unwrap()),
  ];
  const schema = z.toJSONSchema(partsList, {
    io: 'input',
    unrepresentable: 'any',
    override: ({ zodSchema, jsonSchema }) => {
      // a load, a matching transformer and what is on the air may also stand on one line
      if (zodSchema instanceof z.ZodDiscriminatedUnion || onOneLine.includes(zodSchema)) {
        const { oneOf, anyOf, ...rest } = jsonSchema;
        const mappings = oneOf ?? anyOf ?? [rest];
        for (const key of Object.keys(jsonSchema)) delete (jsonSchema as Record<string, unknown>)[key];
        Object.assign(jsonSchema, rest, { anyOf: [{ type: ['string', 'number'] }, ...mappings] });
      }
    },
  });
  return { title: 'Presolder parts list', ...schema };
}
