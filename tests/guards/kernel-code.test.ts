import { expect, it } from 'vitest';
import { compileKernel } from '../tools/kernel.mjs';
import { textOf } from './source-files.ts';

it('the kept bytes of the renderer’s loop are those of its source, compiled again', async () => {
  expect(await compileKernel()).toBe(textOf('src/engine/renderer/kernel/code.ts'));
});
