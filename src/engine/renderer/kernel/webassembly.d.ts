// The part of the WebAssembly interface that the kernel uses (W3C WebAssembly JavaScript Interface): the engine is
// checked without browser or Node types, and both have this.
declare namespace WebAssembly {
  class Memory {
    constructor(descriptor: { initial: number });
    readonly buffer: ArrayBuffer;
  }
  class Module {
    constructor(bytes: Uint8Array<ArrayBuffer>);
  }
  class Instance {
    constructor(module: Module, imports: { env: { memory: Memory } });
    readonly exports: object;
  }
}
