/** Stands in, in the bundled command, for decoders whose licences or size keep them out of it. */
export default function noCodec(): never {
  throw new Error('no decoder for this format in this build');
}
