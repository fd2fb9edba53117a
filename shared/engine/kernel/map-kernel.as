// Batched double-precision transforms and signal products for two-dimensional maps, in AssemblyScript with 128-bit SIMD.
//
// One row of a batch is 64 bytes: the real parts of four neighbouring columns, then their imaginary parts. All offsets are
// bytes into the module's memory, which shared/engine/kernel/map-engine.ts lays out. The transform is exp(+i ...), not
// normalised: sample n waits in row order[n] (digit-reversed), the result is in natural order. Tables that are read four
// columns at a time carry zeros beyond their last entry.

const ROW: usize = 64
const HALF: usize = 32
const VECTOR: usize = 16

/** First byte that belongs to the caller. */
export const heapBase: usize = __heap_base

// @ts-ignore: decorator
@inline function add(a: v128, b: v128): v128 { return f64x2.add(a, b) }
// @ts-ignore: decorator
@inline function sub(a: v128, b: v128): v128 { return f64x2.sub(a, b) }
// @ts-ignore: decorator
@inline function mul(a: v128, b: v128): v128 { return f64x2.mul(a, b) }
// @ts-ignore: decorator
@inline function splat(at: usize): v128 { return v128.load64_splat(at) }

/** Transform of two neighbouring rows. */
function pair(p0: usize): void {
  for (let v: usize = 0; v < ROW; v += VECTOR) {
    const a = v128.load(p0 + v)
    const b = v128.load(p0 + ROW + v)
    v128.store(p0 + v, add(a, b))
    v128.store(p0 + ROW + v, sub(a, b))
  }
}

/** Transform of four neighbouring rows, residues 0 1 2 3. */
function four(p0: usize): void {
  const p1 = p0 + ROW
  const p2 = p1 + ROW
  const p3 = p2 + ROW
  for (let v: usize = 0; v < HALF; v += VECTOR) {
    const ar = v128.load(p0 + v)
    const ai = v128.load(p0 + v + HALF)
    const cr = v128.load(p2 + v)
    const ci = v128.load(p2 + v + HALF)
    const evenR = add(ar, cr)
    const evenI = add(ai, ci)
    const oddR = sub(ar, cr)
    const oddI = sub(ai, ci)
    const br = v128.load(p1 + v)
    const bi = v128.load(p1 + v + HALF)
    const dr = v128.load(p3 + v)
    const di = v128.load(p3 + v + HALF)
    const sumR = add(br, dr)
    const sumI = add(bi, di)
    const rotR = sub(di, bi)
    const rotI = sub(br, dr)
    v128.store(p0 + v, add(evenR, sumR))
    v128.store(p0 + v + HALF, add(evenI, sumI))
    v128.store(p1 + v, add(oddR, rotR))
    v128.store(p1 + v + HALF, add(oddI, rotI))
    v128.store(p2 + v, sub(evenR, sumR))
    v128.store(p2 + v + HALF, sub(evenI, sumI))
    v128.store(p3 + v, sub(oddR, rotR))
    v128.store(p3 + v + HALF, sub(oddI, rotI))
  }
}

/** Joins four transforms of length/4 that lie one after another. Twiddles: w^j, w^2j, w^3j as six numbers. */
function join(buffer: usize, length: usize, twiddles: usize): void {
  const quarter = (length >> 2) * ROW
  const end = buffer + quarter
  for (let p0 = buffer; p0 < end; p0 += ROW) {
    const w1r = splat(twiddles)
    const w1i = splat(twiddles + 8)
    const w2r = splat(twiddles + 16)
    const w2i = splat(twiddles + 24)
    const w3r = splat(twiddles + 32)
    const w3i = splat(twiddles + 40)
    twiddles += 48
    const p1 = p0 + quarter
    const p2 = p1 + quarter
    const p3 = p2 + quarter
    for (let v: usize = 0; v < HALF; v += VECTOR) {
      let xr = v128.load(p2 + v)
      let xi = v128.load(p2 + v + HALF)
      const cr = sub(mul(xr, w2r), mul(xi, w2i))
      const ci = add(mul(xr, w2i), mul(xi, w2r))
      const ar = v128.load(p0 + v)
      const ai = v128.load(p0 + v + HALF)
      const evenR = add(ar, cr)
      const evenI = add(ai, ci)
      const oddR = sub(ar, cr)
      const oddI = sub(ai, ci)
      xr = v128.load(p1 + v)
      xi = v128.load(p1 + v + HALF)
      const br = sub(mul(xr, w1r), mul(xi, w1i))
      const bi = add(mul(xr, w1i), mul(xi, w1r))
      xr = v128.load(p3 + v)
      xi = v128.load(p3 + v + HALF)
      const dr = sub(mul(xr, w3r), mul(xi, w3i))
      const di = add(mul(xr, w3i), mul(xi, w3r))
      const sumR = add(br, dr)
      const sumI = add(bi, di)
      const rotR = sub(di, bi)
      const rotI = sub(br, dr)
      v128.store(p0 + v, add(evenR, sumR))
      v128.store(p0 + v + HALF, add(evenI, sumI))
      v128.store(p1 + v, add(oddR, rotR))
      v128.store(p1 + v + HALF, add(oddI, rotI))
      v128.store(p2 + v, sub(evenR, sumR))
      v128.store(p2 + v + HALF, sub(evenI, sumI))
      v128.store(p3 + v, sub(oddR, rotR))
      v128.store(p3 + v + HALF, sub(oddI, rotI))
    }
  }
}

/** In-place transform of `length` rows, depth first, so that short lengths stay in the first cache. */
export function transform(buffer: usize, length: usize, twiddles: usize): void {
  if (length == 4) {
    four(buffer)
    return
  }
  if (length == 2) {
    pair(buffer)
    return
  }
  const quarter = length >> 2
  const bytes = quarter * ROW
  const shorter = twiddles + 48 * quarter
  transform(buffer, quarter, shorter)
  transform(buffer + bytes, quarter, shorter)
  transform(buffer + 2 * bytes, quarter, shorter)
  transform(buffer + 3 * bytes, quarter, shorter)
  join(buffer, length, twiddles)
}

/** Clears the rows order[from .. to - 1]. */
export function clearRows(buffer: usize, order: usize, from: usize, to: usize): void {
  const zero = f64x2.splat(0)
  for (let k = from; k < to; k++) {
    const row = buffer + ROW * <usize>load<u32>(order + 4 * k)
    for (let v: usize = 0; v < ROW; v += VECTOR) v128.store(row + v, zero)
  }
}

/**
 * Signal P(t1) Q(t3) H(t1+t3) T(t3-t1) of the columns t1 = first .. first + 3, all t3 < samples, into rows order[t3].
 * toeplitz 0 stands for none; it is symmetric, entry samples - 1 is its centre.
 */
export function fillProduct(
  buffer: usize, order: usize, samples: usize, first: usize,
  pr: usize, pi: usize, qr: usize, qi: usize, hr: usize, hi: usize, toeplitz: usize,
): void {
  const column = 8 * first
  for (let v: usize = 0; v < HALF; v += VECTOR) {
    const ar = v128.load(pr + column + v)
    const ai = v128.load(pi + column + v)
    const left = hr + column + v
    const right = hi + column + v
    const centre = toeplitz + column + v + 8 * (samples - 1)
    for (let k: usize = 0; k < samples; k++) {
      const row = buffer + ROW * <usize>load<u32>(order + 4 * k) + v
      const br = splat(qr + 8 * k)
      const bi = splat(qi + 8 * k)
      const cr = v128.load(left + 8 * k)
      const ci = v128.load(right + 8 * k)
      let ur = sub(mul(cr, br), mul(ci, bi))
      let ui = add(mul(cr, bi), mul(ci, br))
      if (toeplitz) {
        const t = v128.load(centre - 8 * k)
        ur = mul(ur, t)
        ui = mul(ui, t)
      }
      v128.store(row, sub(mul(ur, ar), mul(ui, ai)))
      v128.store(row + HALF, add(mul(ur, ai), mul(ui, ar)))
    }
  }
}

/** Bytes between the tables of the bank: beyond the longest one (2 x 4096 + 16 entries), off the power of two. */
const BANK: usize = 65792

/**
 * Hermitian part of z(t1, t3) = NR(t1, t3) + R(-t1, t3) on the torus of `length`, columns t1 = first .. first + 3:
 *   h = [NR(a, b) + NR*(-a, -b) + R(-a, b) + R*(a, -b)] / 2.
 * `bank` holds tables BANK bytes apart: at a + b the real and imaginary H of the first two terms (0 to 3) and the ensemble (4); at
 * a - b + length those of the last two (5 to 8); at a the P of the four terms (9 to 16). `third` holds eight numbers for
 * every b, the Q of the four terms. Constant distances leave one pointer for each of them.
 */
export function fillHermitian(
  buffer: usize, order: usize, length: usize, first: usize, bank: usize, third: usize,
): void {
  for (let v: usize = 0; v < HALF; v += VECTOR) {
    const column = bank + 8 * first + v
    const p0 = v128.load(column, 9 * BANK)
    const p1 = v128.load(column, 10 * BANK)
    const p2 = v128.load(column, 11 * BANK)
    const p3 = v128.load(column, 12 * BANK)
    const p4 = v128.load(column, 13 * BANK)
    const p5 = v128.load(column, 14 * BANK)
    const p6 = v128.load(column, 15 * BANK)
    const p7 = v128.load(column, 16 * BANK)
    let forward = column
    let backward = column + 8 * length
    let q = third
    const last = order + 4 * length
    for (let at = order; at < last; at += 4) {
      const row = buffer + ROW * <usize>load<u32>(at) + v
      let xr = v128.load(forward)
      let xi = v128.load(forward, BANK)
      let br = v128.load64_splat(q)
      let bi = v128.load64_splat(q, 8)
      let ur = sub(mul(xr, br), mul(xi, bi))
      let ui = add(mul(xr, bi), mul(xi, br))
      let sr = sub(mul(ur, p0), mul(ui, p1))
      let si = add(mul(ur, p1), mul(ui, p0))

      xr = v128.load(forward, 2 * BANK)
      xi = v128.load(forward, 3 * BANK)
      br = v128.load64_splat(q, 16)
      bi = v128.load64_splat(q, 24)
      ur = sub(mul(xr, br), mul(xi, bi))
      ui = add(mul(xr, bi), mul(xi, br))
      sr = add(sr, sub(mul(ur, p2), mul(ui, p3)))
      si = add(si, add(mul(ur, p3), mul(ui, p2)))

      // The ensemble multiplies the sum of both rephasing terms.
      xr = v128.load(backward, 5 * BANK)
      xi = v128.load(backward, 6 * BANK)
      br = v128.load64_splat(q, 32)
      bi = v128.load64_splat(q, 40)
      ur = sub(mul(xr, br), mul(xi, bi))
      ui = add(mul(xr, bi), mul(xi, br))
      let tr = sub(mul(ur, p4), mul(ui, p5))
      let ti = add(mul(ur, p5), mul(ui, p4))

      xr = v128.load(backward, 7 * BANK)
      xi = v128.load(backward, 8 * BANK)
      br = v128.load64_splat(q, 48)
      bi = v128.load64_splat(q, 56)
      ur = sub(mul(xr, br), mul(xi, bi))
      ui = add(mul(xr, bi), mul(xi, br))
      tr = add(tr, sub(mul(ur, p6), mul(ui, p7)))
      ti = add(ti, add(mul(ur, p7), mul(ui, p6)))

      const t = v128.load(forward, 4 * BANK)
      v128.store(row, add(sr, mul(tr, t)))
      v128.store(row + HALF, add(si, mul(ti, t)))
      forward += 8
      backward -= 8
      q += 64
    }
  }
}

/** Four rows `source[0..3]` of two columns each, transposed in 2 x 2 blocks. */
// @ts-ignore: decorator
@inline function transposed(r0: usize, r1: usize, r2: usize, r3: usize, target: usize): void {
  for (let c: usize = 0; c < HALF; c += VECTOR) {
    const a = v128.load(r0 + c)
    const b = v128.load(r1 + c)
    const d = v128.load(r2 + c)
    const e = v128.load(r3 + c)
    const row = target + (c >> 4) * 2 * ROW
    v128.store(row, v128.shuffle<f64>(a, b, 0, 2))
    v128.store(row + VECTOR, v128.shuffle<f64>(d, e, 0, 2))
    v128.store(row + ROW, v128.shuffle<f64>(a, b, 1, 3))
    v128.store(row + ROW + VECTOR, v128.shuffle<f64>(d, e, 1, 3))
  }
}

/**
 * Moves the kept bins of a transformed batch of columns first .. first + 3 to the middle store: block g holds bins
 * places[4g .. 4g+3], one row per column. `groups` blocks, `blockBytes` apart.
 */
export function keepBins(
  buffer: usize, middle: usize, blockBytes: usize, first: usize, places: usize, groups: usize,
): void {
  for (let g: usize = 0; g < groups; g++) {
    const at = places + 16 * g
    const r0 = buffer + ROW * <usize>load<u32>(at)
    const r1 = buffer + ROW * <usize>load<u32>(at + 4)
    const r2 = buffer + ROW * <usize>load<u32>(at + 8)
    const r3 = buffer + ROW * <usize>load<u32>(at + 12)
    const target = middle + g * blockBytes + ROW * first
    transposed(r0, r1, r2, r3, target)
    transposed(r0 + HALF, r1 + HALF, r2 + HALF, r3 + HALF, target + HALF)
  }
}

/** Copies the columns of one block into transform order. */
export function gather(buffer: usize, order: usize, block: usize, count: usize): void {
  for (let k: usize = 0; k < count; k++) {
    const row = buffer + ROW * <usize>load<u32>(order + 4 * k)
    const from = block + ROW * k
    for (let v: usize = 0; v < ROW; v += VECTOR) v128.store(row + v, v128.load(from + v))
  }
}

/**
 * Two blocks a, b of a Hermitian store (columns 0 .. length/2) as one complex batch a + i b over all columns: its
 * transform is real in either part.
 */
export function gatherHermitian(buffer: usize, order: usize, a: usize, b: usize, length: usize): void {
  const half = length >> 1
  for (let k: usize = 0; k <= half; k++) {
    const row = buffer + ROW * <usize>load<u32>(order + 4 * k)
    const mirrored = k > 0 && k < half ? buffer + ROW * <usize>load<u32>(order + 4 * (length - k)) : 0
    const from = ROW * k
    for (let v: usize = 0; v < HALF; v += VECTOR) {
      const ar = v128.load(a + from + v)
      const ai = v128.load(a + from + v + HALF)
      const br = v128.load(b + from + v)
      const bi = v128.load(b + from + v + HALF)
      v128.store(row + v, sub(ar, bi))
      v128.store(row + v + HALF, add(ai, br))
      if (mirrored) {
        v128.store(mirrored + v, add(ar, bi))
        v128.store(mirrored + v + HALF, sub(br, ai))
      }
    }
  }
}

/** Writes the kept bins of a batch to four columns of the two output planes, from `column` on; `pitch` bytes a row. */
export function scatter(
  buffer: usize, places: usize, count: usize, re: usize, im: usize, pitch: usize, column: usize,
): void {
  for (let k: usize = 0; k < count; k++) {
    const row = buffer + ROW * <usize>load<u32>(places + 4 * k)
    const to = k * pitch + 8 * column
    v128.store(re + to, v128.load(row))
    v128.store(re + to + VECTOR, v128.load(row + VECTOR))
    v128.store(im + to, v128.load(row + HALF))
    v128.store(im + to + VECTOR, v128.load(row + HALF + VECTOR))
  }
}

/** out[j] += factor[j] (p q[j]), j < count; factor 0 stands for 1. Any alignment. */
export function addProduct(
  pr: f64, pi: f64, qr: usize, qi: usize, factor: usize, outR: usize, outI: usize, count: usize,
): void {
  const ar = f64x2.splat(pr)
  const ai = f64x2.splat(pi)
  const pairs = (count & ~1) << 3
  for (let j: usize = 0; j < pairs; j += VECTOR) {
    const br = v128.load(qr + j)
    const bi = v128.load(qi + j)
    let vr = sub(mul(ar, br), mul(ai, bi))
    let vi = add(mul(ar, bi), mul(ai, br))
    if (factor) {
      const f = v128.load(factor + j)
      vr = mul(vr, f)
      vi = mul(vi, f)
    }
    v128.store(outR + j, add(v128.load(outR + j), vr))
    v128.store(outI + j, add(v128.load(outI + j), vi))
  }
  if (count & 1) {
    const br = load<f64>(qr + pairs)
    const bi = load<f64>(qi + pairs)
    const f = factor ? load<f64>(factor + pairs) : 1
    store<f64>(outR + pairs, load<f64>(outR + pairs) + f * (pr * br - pi * bi))
    store<f64>(outI + pairs, load<f64>(outI + pairs) + f * (pr * bi + pi * br))
  }
}

/** out[j] += p q[j] h[j], j < count. Any alignment. */
export function addTriple(
  pr: f64, pi: f64, qr: usize, qi: usize, hr: usize, hi: usize, outR: usize, outI: usize, count: usize,
): void {
  const ar = f64x2.splat(pr)
  const ai = f64x2.splat(pi)
  const pairs = (count & ~1) << 3
  for (let j: usize = 0; j < pairs; j += VECTOR) {
    const br = v128.load(qr + j)
    const bi = v128.load(qi + j)
    const vr = sub(mul(ar, br), mul(ai, bi))
    const vi = add(mul(ar, bi), mul(ai, br))
    const cr = v128.load(hr + j)
    const ci = v128.load(hi + j)
    v128.store(outR + j, add(v128.load(outR + j), sub(mul(vr, cr), mul(vi, ci))))
    v128.store(outI + j, add(v128.load(outI + j), add(mul(vr, ci), mul(vi, cr))))
  }
  if (count & 1) {
    const br = load<f64>(qr + pairs)
    const bi = load<f64>(qi + pairs)
    const vr = pr * br - pi * bi
    const vi = pr * bi + pi * br
    const cr = load<f64>(hr + pairs)
    const ci = load<f64>(hi + pairs)
    store<f64>(outR + pairs, load<f64>(outR + pairs) + (vr * cr - vi * ci))
    store<f64>(outI + pairs, load<f64>(outI + pairs) + (vr * ci + vi * cr))
  }
}
