// Neither package ships types. Only the calls used here are declared, with the options the wrappers must always give.

declare module 'wav-decoder' {
  interface DecodedWav {
    readonly sampleRate: number;
    readonly channelData: readonly Float32Array[];
  }
  const wavDecoder: {
    readonly decode: { sync(file: ArrayBuffer, options: { readonly symmetric: true }): DecodedWav };
  };
  export default wavDecoder;
}

declare module 'wav-encoder' {
  interface PcmToEncode {
    readonly sampleRate: number;
    readonly channelData: readonly Float32Array[];
  }
  interface EncodeOptions {
    readonly bitDepth: 16 | 24 | 32;
    readonly float: boolean;
    readonly symmetric: true;
  }
  const wavEncoder: {
    readonly encode: { sync(pcm: PcmToEncode, options: EncodeOptions): ArrayBuffer };
  };
  export default wavEncoder;
}
