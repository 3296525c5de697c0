import type { Page } from 'playwright-core';

/**
 * Runs in the page before its own script: whatever is connected to the loudspeaker is recorded too, sample by sample, on
 * the audio thread itself. The page knows nothing of it.
 */
export const RECORDER = `(() => {
  const program = "registerProcessor('recorder', class extends AudioWorkletProcessor { process(inputs) { const input = inputs[0][0]; this.port.postMessage(input ? input.slice() : new Float32Array(128)); return true; } })";
  const add = AudioWorklet.prototype.addModule;
  AudioWorklet.prototype.addModule = async function (address) {
    await add.call(this, 'data:text/javascript,' + encodeURIComponent(program));
    return add.call(this, address);
  };
  window.recorded = [];
  const connect = AudioNode.prototype.connect;
  AudioNode.prototype.connect = function (target, ...rest) {
    if (target instanceof AudioDestinationNode) {
      const recorder = new AudioWorkletNode(this.context, 'recorder', { numberOfOutputs: 1 });
      recorder.port.onmessage = ({ data }) => window.recorded.push(data);
      connect.call(this, recorder);
      connect.call(recorder, target);
      return target;
    }
    return connect.call(this, target, ...rest);
  };
})();`;

/** Everything recorded so far, before the page's volume (which is set back by its own figure). */
export async function recorded(page: Page): Promise<Float32Array> {
  const text: string = await page.evaluate(`(() => {
    const chunks = window.recorded;
    const all = new Float32Array(chunks.reduce((sum, chunk) => sum + chunk.length, 0));
    let at = 0;
    for (const chunk of chunks) {
      all.set(chunk, at);
      at += chunk.length;
    }
    const bytes = new Uint8Array(all.buffer);
    let out = '';
    for (let n = 0; n < bytes.length; n += 8192) out += String.fromCharCode(...bytes.subarray(n, n + 8192));
    return btoa(out);
  })()`);
  const bytes = Buffer.from(text, 'base64');
  return new Float32Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength));
}

/** Frame of `sound` at which the stretch of `heard` from `at` on is found, and how far it is off; scale is given. */
export function placeOf(
  heard: Float32Array,
  at: number,
  length: number,
  sound: Float64Array,
  scale: number,
): { readonly frame: number; readonly worst: number } {
  let best = { frame: -1, worst: Number.POSITIVE_INFINITY };
  if (at < 0 || at + length > heard.length) return best;
  for (let frame = 0; frame + length <= sound.length; frame++) {
    let worst = 0;
    for (let n = 0; n < length; n += 1) {
      const apart = Math.abs((heard[at + n] as number) - scale * (sound[frame + n] as number));
      if (apart > worst) worst = apart;
      if (worst >= best.worst) break;
    }
    if (worst < best.worst) best = { frame, worst };
  }
  return best;
}
