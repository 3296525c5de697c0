import * as z from 'zod';
import { circuitShape, partsList } from './schema.ts';

/**
 * The parts list's JSON Schema (draft 2020-12), made from the definition that the program checks lists with, so that an
 * editor can complete and check one. Defaults are shown as they are written.
 */
export function partsListSchema(): Record<string, unknown> {
  const matching = circuitShape.output.unwrap().shape.matching.unwrap();
  const schema = z.toJSONSchema(partsList, {
    io: 'input',
    unrepresentable: 'any',
    override: ({ zodSchema, jsonSchema }) => {
      // a load and a matching transformer may also stand on one line
      if (zodSchema instanceof z.ZodDiscriminatedUnion || zodSchema === matching) {
        const { oneOf, anyOf, ...rest } = jsonSchema;
        const mappings = oneOf ?? anyOf ?? [rest];
        for (const key of Object.keys(jsonSchema)) delete (jsonSchema as Record<string, unknown>)[key];
        Object.assign(jsonSchema, rest, { anyOf: [{ type: ['string', 'number'] }, ...mappings] });
      }
    },
  });
  return { title: 'Presolder parts list', ...schema };
}
