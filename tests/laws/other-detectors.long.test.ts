import { describe, it } from 'vitest';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { expectProved, OTHER_KINDS, seededDetectors } from './other-detector-circuits.ts';

const tables = new TableStore();

describe.each(OTHER_KINDS)(
  '%s: renderer against the integration of every carrier cycle, 12 seeded circuits',
  (kind) => {
    seededDetectors(kind, 2, 12).forEach((c, k) => {
      it(`${k + 1}: ${c.said}`, () => expectProved(c, tables));
    });
  },
);
