import { describe, it } from 'vitest';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { LOAD_KINDS, loadCases } from './load-cases.ts';
import { expectProved } from './load-proof.ts';

const tables = new TableStore();

describe.each(LOAD_KINDS)('renderer against every carrier cycle: %s', (kind) => {
  loadCases(kind, 12).forEach((c, k) => {
    it(`${k + 1}: ${c.said}`, () => expectProved(c, tables));
  });
});
