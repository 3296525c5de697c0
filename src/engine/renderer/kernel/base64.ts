const DIGITS = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/';

/** Bytes of a base64 text (RFC 4648). Written out because an audio thread has no decoder of its own. */
export function bytesFromBase64(text: string): Uint8Array<ArrayBuffer> {
  const clean = text.replace(/=+$/, '');
  const bytes = new Uint8Array(Math.floor((clean.length * 3) / 4));
  let held = 0;
  let bits = 0;
  let at = 0;
  for (const digit of clean) {
    held = ((held << 6) | DIGITS.indexOf(digit)) & 0xffffff;
    bits += 6;
    if (bits >= 8) {
      bits -= 8;
      bytes[at++] = (held >> bits) & 0xff;
    }
  }
  return bytes;
}
