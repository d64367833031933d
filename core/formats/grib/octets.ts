// Numbers of GRIB headers: big-endian, negative ones as sign and magnitude (WMO Manual on Codes, FM 92, regulation 92.1.5).

export function unsigned16(bytes: Uint8Array, at: number): number {
  return ((bytes[at] as number) << 8) | (bytes[at + 1] as number);
}

export function unsigned24(bytes: Uint8Array, at: number): number {
  return ((bytes[at] as number) << 16) | ((bytes[at + 1] as number) << 8) | (bytes[at + 2] as number);
}

export function unsigned32(bytes: Uint8Array, at: number): number {
  return (bytes[at] as number) * 2 ** 24 + unsigned24(bytes, at + 1);
}

/** Eight octets; exact below 2⁵³, which no file reaches. */
export function unsigned64(bytes: Uint8Array, at: number): number {
  return unsigned32(bytes, at) * 2 ** 32 + unsigned32(bytes, at + 4);
}

function signed(value: number, half: number): number {
  return value < half ? value : half - value;
}

export function signed8(bytes: Uint8Array, at: number): number {
  return signed(bytes[at] as number, 0x80);
}

export function signed16(bytes: Uint8Array, at: number): number {
  return signed(unsigned16(bytes, at), 0x8000);
}

export function signed24(bytes: Uint8Array, at: number): number {
  return signed(unsigned24(bytes, at), 0x80_0000);
}

export function signed32(bytes: Uint8Array, at: number): number {
  return signed(unsigned32(bytes, at), 0x8000_0000);
}

/** IBM System/360 single precision, GRIB edition 1's reference values: ± 2⁻²⁴ · B · 16^(A − 64). */
export function ibmFloat(bytes: Uint8Array, at: number): number {
  const first = bytes[at] as number;
  const magnitude = unsigned24(bytes, at + 1) * 2 ** (4 * ((first & 0x7f) - 64) - 24);
  return first < 0x80 ? magnitude : -magnitude;
}

export function ieeeFloat(bytes: Uint8Array, at: number): number {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength).getFloat32(at);
}

/** True where four letters stand. */
export function spells(bytes: Uint8Array, at: number, word: string): boolean {
  for (let i = 0; i < word.length; i++) if (bytes[at + i] !== word.charCodeAt(i)) return false;
  return true;
}
