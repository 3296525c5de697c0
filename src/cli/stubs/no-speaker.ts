/**
 * Stands in for the sound-card addon in the bundled command: it is native code, and nothing that only writes files
 * needs it. Opening it says so instead of failing in an addon loader.
 */
export default function noSpeaker(): never {
  throw new Error('this build plays nothing: the sound-card addon @audio/speaker is not installed');
}
