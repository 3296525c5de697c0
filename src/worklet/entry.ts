import { registerDetector, type WorkletScope } from './detector-processor.ts';

// the audio thread's global scope carries the three names that the processor needs
registerDetector(globalThis as unknown as WorkletScope);
