// Run by itself in a process that can call the collector: prints the bytes that a second render takes, by path.
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { DetectorRenderer } from '../../src/engine/renderer/detector-renderer.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { gridLeak } from '../laws/grid-leak-circuit.ts';

const BLOCK = 128;
/** Enough for every function on the way to be compiled for good. */
const WARM_BLOCKS = 2000;
/** Few enough that 16 bytes a step would not yet fill what the collector empties by itself, 1 MB. */
const COUNTED_BLOCKS = 50;

/**
 * Least of a few counts, because the runtime takes some memory of its own now and then; of more where a busy machine has
 * not yet compiled the loop for good, which it does beside it.
 */
function leastBytes(law: 'tube' | 'square' | 'linear', kind: 'fastest' | 'plain'): number {
  const rest = restPoint(gridLeak({ law, levelVoltsRms: 0.5 }));
  const renderer = new DetectorRenderer(rest, new TableStore().lawsFor(rest, 0.8), 48_000, 'normal', kind);
  const input = Float64Array.from({ length: BLOCK }, (_, n) => 0.8 * Math.sin(0.3 * n));
  const output = new Float64Array(BLOCK);
  const render = (blocks: number): void => {
    for (let k = 0; k < blocks; k++) renderer.process(input, output, BLOCK);
  };
  render(WARM_BLOCKS);
  let least = Number.POSITIVE_INFINITY;
  for (let round = 0; round < 8 || (round < 60 && least > BLOCK * COUNTED_BLOCKS); round++) {
    globalThis.gc?.();
    const before = process.memoryUsage().heapUsed;
    render(COUNTED_BLOCKS);
    least = Math.min(least, process.memoryUsage().heapUsed - before);
  }
  return least;
}

const bytes = {
  steps: 2 * BLOCK * COUNTED_BLOCKS,
  compiled: leastBytes('tube', 'fastest'),
  plain: leastBytes('tube', 'plain'),
  square: leastBytes('square', 'plain'),
  linear: leastBytes('linear', 'plain'),
};
process.stdout.write(JSON.stringify(bytes));
