/**
 * Absorption and emission of one model on a grid of energies.
 *
 *   A(E) = (1/(pi hbar)) Re Int_0^inf dt exp(i (E - E0) t/hbar) a(t),  a(t) = exp(-g0(t) - gam t - sig^2 t^2/2)
 *   F(E0 + y) = A(E0 - y), because emission has the conjugate signal
 *
 * | symbol | variable | unit | shape |
 * | --- | --- | --- | --- |
 * | E | energiesMeV | meV | [2 halfBins], E0 at index halfBins |
 * | A, F | absorption, emission | 1/meV, area 1 | [2 halfBins] |
 *
 * Source: Kubo, J. Phys. Soc. Jpn 17, 1100 (1962); Mukamel (1995), ch. 8. No prefactor w or w^3.
 *
 * Algorithm: the real part of the transform of a one-sided signal is the transform of its Hermitian part, so one complex
 * transform of half the length gives A (Cooley, Lewis & Welch 1970). A sampled signal gives the sum of A over all
 * multiples of the span; phonon sidebands end inside the span by the choice of the grid, the Lorentzian wings do not
 * and are taken out with `foldedWings`. Accuracy at the engine's own grid: 5e-9 of the maximum (tests/engine/linear.spec.ts).
 */
import { ensembleSigma, homogeneousRate } from './coherence-decay'
import { HBAR_MEV_PS } from './constants'
import { fftPlan, forwardFft } from './fft'
import { foldedWings, type WingMoments } from './folded-wings'
import type { SpectralGrid } from './grid'
import type { ComplexSeries, LineModel } from './types'

const NEGLIGIBLE_DECAY = 40

export interface LinearSpectra {
  energiesMeV: Float64Array
  absorption: Float64Array
  emission: Float64Array
  /** |a| at the end of the window: what the cut leaves, as a fraction of a(0). */
  signalAtEnd: number
  /** Largest folded wing that was taken off, as a fraction of the maximum. */
  foldedShare: number
}

/** a(t_j) = exp(-g0 - gam t - sig^2 t^2/2) on t_j = j stepPs. Zero once gam t + sig^2 t^2/2 passes 40. */
export const linearSignal = (model: LineModel, broadening: ComplexSeries, stepPs: number): ComplexSeries => {
  const gam = homogeneousRate(model)
  const sig = ensembleSigma(model)
  const samples = broadening.re.length
  const re = new Float64Array(samples)
  const im = new Float64Array(samples)
  for (let j = 0; j < samples; j++) {
    const t = j * stepPs
    const decay = gam * t + 0.5 * sig * sig * t * t
    // Re g0 >= 0: from here on the signal is below 5e-18, and zero for every sum.
    if (decay > NEGLIGIBLE_DECAY) break
    const size = Math.exp(-broadening.re[j]! - decay)
    const phase = -broadening.im[j]!
    re[j] = size * Math.cos(phase)
    im[j] = size * Math.sin(phase)
  }
  return { re, im }
}

/**
 * Re sum_j weight_j a_j exp(+2 pi i j m/N) for m = 0..N-1, weight 1/2 at j = 0 and 1 elsewhere; a is padded with zeros to N.
 * One forward transform of length N/2.
 */
export const realSpectrum = (signal: ComplexSeries, length: number): Float64Array => {
  const half = length / 2
  // h_j = (a_j + conj a_{N-j})/2 is Hermitian, so its transform is real: X_m = Re of the wanted sum.
  const hr = new Float64Array(length)
  const hi = new Float64Array(length)
  for (let j = 0; j < signal.re.length; j++) {
    const a = 0.5 * signal.re[j]!
    const b = 0.5 * signal.im[j]!
    hr[j]! += a
    hi[j]! += b
    if (j === 0) continue
    hr[length - j]! += a
    hi[length - j]! -= b
  }
  hi[0] = 0
  const zr = new Float64Array(half)
  const zi = new Float64Array(half)
  const twist = quarterWave(length)
  // Even and odd samples of X come from h_j +- h_{j+N/2}, the odd ones with the twist exp(+2 pi i j/N); both are real after
  // the transform, so they travel as z = even + i odd.
  for (let j = 0; j < half; j++) {
    const difR = hr[j]! - hr[j + half]!
    const difI = hi[j]! - hi[j + half]!
    const c = twist[2 * j]!
    const s = twist[2 * j + 1]!
    zr[j] = hr[j]! + hr[j + half]! - (difR * s + difI * c)
    zi[j] = hi[j]! + hi[j + half]! + (difR * c - difI * s)
  }
  // exp(+...): transform with the parts exchanged.
  forwardFft(zi, zr, fftPlan(half))
  const spectrum = new Float64Array(length)
  for (let m = 0; m < half; m++) {
    spectrum[2 * m] = zr[m]!
    spectrum[2 * m + 1] = zi[m]!
  }
  return spectrum
}

const waves = new Map<number, Float64Array>()

/** cos and sin of 2 pi j/N, j < N/2, in pairs; kept per length. */
const quarterWave = (length: number): Float64Array => {
  let wave = waves.get(length)
  if (!wave) {
    wave = new Float64Array(length)
    for (let j = 0; j < length / 2; j++) {
      wave[2 * j] = Math.cos((2 * Math.PI * j) / length)
      wave[2 * j + 1] = Math.sin((2 * Math.PI * j) / length)
    }
    waves.set(length, wave)
  }
  return wave
}

/** Absorption and emission on the kept bins of `grid`; `broadening` holds g0 on its samples. */
export const linearSpectra = (
  model: LineModel,
  grid: SpectralGrid,
  broadening: ComplexSeries,
  moments: WingMoments,
): LinearSpectra => {
  const { timeStepPs, paddedSamples, halfBins, stride, energyStepMeV, spanMeV } = grid
  const signal = linearSignal(model, broadening, timeStepPs)
  const spectrum = realSpectrum(signal, paddedSamples)
  const scale = timeStepPs / (Math.PI * HBAR_MEV_PS)
  const count = 2 * halfBins
  const absorption = new Float64Array(count)
  const emission = new Float64Array(count)
  const energiesMeV = new Float64Array(count)
  for (let i = 0; i < count; i++) {
    const bin = (i - halfBins) * stride
    const offset = bin * energyStepMeV
    energiesMeV[i] = model.zeroPhononEnergyMeV + offset
    const wrapped = ((bin % paddedSamples) + paddedSamples) % paddedSamples
    const mirrored = wrapped === 0 ? 0 : paddedSamples - wrapped
    const folded = foldedWings(offset, spanMeV, model.zeroPhononFwhmMeV / 2, moments)
    const mirrorFolded = foldedWings(-offset, spanMeV, model.zeroPhononFwhmMeV / 2, moments)
    absorption[i] = scale * spectrum[wrapped]! - folded
    emission[i] = scale * spectrum[mirrored]! - mirrorFolded
  }
  const last = signal.re.length - 1
  const folding = (offset: number) => foldedWings(offset, spanMeV, model.zeroPhononFwhmMeV / 2, moments)
  const edge = halfBins * stride * energyStepMeV
  const peak = absorption.reduce((a, b) => Math.max(a, b), 0)
  return {
    energiesMeV,
    absorption,
    emission,
    signalAtEnd: Math.hypot(signal.re[last]!, signal.im[last]!),
    // The images grow towards the ends of the span.
    foldedShare: Math.max(folding(-edge), folding(edge)) / peak,
  }
}

/** Bins of the plain trapezoid sum that a grid means: S(E0 + 2 pi hbar m/(n dt)), no padding and no correction, in 1/meV. */
export const linearSampled = (
  model: LineModel,
  stepPs: number,
  broadening: ComplexSeries,
  bins: readonly number[],
): { absorption: Float64Array; emission: Float64Array } => {
  const { re, im } = linearSignal(model, broadening, stepPs)
  const n = re.length
  const sum = (bin: number): number => {
    let total = re[0]! / 2
    for (let j = 1; j < n; j++) {
      // The phase is reduced in whole numbers first, so that it stays exact for any j and bin.
      const phase = (2 * Math.PI * ((j * bin) % n)) / n
      total += re[j]! * Math.cos(phase) - im[j]! * Math.sin(phase)
    }
    return (total * stepPs) / (Math.PI * HBAR_MEV_PS)
  }
  return {
    absorption: Float64Array.from(bins, sum),
    emission: Float64Array.from(bins, (bin) => sum(-bin)),
  }
}
