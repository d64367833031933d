const LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";

/** Bytes of a base64 text (RFC 4648 §4); the core has no atob. */
export function bytesOfBase64(text: string): Uint8Array<ArrayBuffer> {
  const letters = text.replace(/=+$/, "");
  const bytes = new Uint8Array(Math.floor((letters.length * 3) / 4));
  let held = 0;
  let bits = 0;
  let at = 0;
  for (const letter of letters) {
    held = ((held << 6) | LETTERS.indexOf(letter)) & 0xfff;
    bits += 6;
    if (bits >= 8) {
      bits -= 8;
      bytes[at++] = (held >> bits) & 0xff;
    }
  }
  return bytes;
}
