// Big-endian numbers of a file to 64-bit ones, missing ones to NaN, packing undone: several at a time. AssemblyScript.
// ../../swap.ts and ../../../cf/decoding.ts do the same one by one, its oracle in the tests. Nothing is allocated here.

const NOTHING: f64 = NaN;

@inline function settled(x: v128, a: v128, b: v128): v128 {
  return v128.bitselect(f64x2.splat(NOTHING), x, v128.or(f64x2.eq(x, a), f64x2.eq(x, b)));
}
@inline function unpacked(x: v128, a: v128, b: v128, scale: v128, offset: v128): v128 {
  return v128.bitselect(f64x2.splat(NOTHING), f64x2.add(f64x2.mul(x, scale), offset), v128.or(f64x2.eq(x, a), f64x2.eq(x, b)));
}
@inline function turned4(v: v128): v128 {
  return i8x16.shuffle(v, v, 3, 2, 1, 0, 7, 6, 5, 4, 11, 10, 9, 8, 15, 14, 13, 12);
}
@inline function upper(v: v128): v128 {
  return i8x16.shuffle(v, v, 8, 9, 10, 11, 12, 13, 14, 15, 8, 9, 10, 11, 12, 13, 14, 15);
}

/** 32-bit floats, four at a time: `count` is rounded up to that. a, b: missing values as stored; NaN for none. */
export function float32(from: usize, into: usize, count: u32, a: f64, b: f64, scale: f64, offset: f64, isPacked: bool): void {
  const va = f64x2.splat(a), vb = f64x2.splat(b), vs = f64x2.splat(scale), vo = f64x2.splat(offset);
  for (let i: u32 = 0; i < count; i += 4) {
    const v = turned4(v128.load(from + (<usize>i << 2)));
    const low = f64x2.promote_low_f32x4(v), high = f64x2.promote_low_f32x4(upper(v));
    const at = into + (<usize>i << 3);
    if (isPacked) {
      v128.store(at, unpacked(low, va, vb, vs, vo));
      v128.store(at, unpacked(high, va, vb, vs, vo), 16);
    } else {
      v128.store(at, settled(low, va, vb));
      v128.store(at, settled(high, va, vb), 16);
    }
  }
}

/** 16-bit whole numbers, four at a time. */
export function int16(from: usize, into: usize, count: u32, a: f64, b: f64, scale: f64, offset: f64, isPacked: bool): void {
  const va = f64x2.splat(a), vb = f64x2.splat(b), vs = f64x2.splat(scale), vo = f64x2.splat(offset);
  for (let i: u32 = 0; i < count; i += 4) {
    const v = v128.load64_zero(from + (<usize>i << 1));
    const w = i32x4.extend_low_i16x8_s(i8x16.shuffle(v, v, 1, 0, 3, 2, 5, 4, 7, 6, 1, 0, 3, 2, 5, 4, 7, 6));
    const low = f64x2.convert_low_i32x4_s(w), high = f64x2.convert_low_i32x4_s(upper(w));
    const at = into + (<usize>i << 3);
    if (isPacked) {
      v128.store(at, unpacked(low, va, vb, vs, vo));
      v128.store(at, unpacked(high, va, vb, vs, vo), 16);
    } else {
      v128.store(at, settled(low, va, vb));
      v128.store(at, settled(high, va, vb), 16);
    }
  }
}

/** 32-bit words turned round in place, four at a time. */
export function turn32(at: usize, count: u32): void {
  for (let i: u32 = 0; i < count; i += 4) {
    const here = at + (<usize>i << 2);
    v128.store(here, turned4(v128.load(here)));
  }
}
