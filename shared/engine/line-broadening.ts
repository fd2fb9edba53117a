/**
 * Line-broadening function g0(t), referenced to the zero-phonon line.
 *
 *   g0(t) = (1/pi) Int_0^inf dw J(w)/w^2 [ coth(hbar w / 2 k_B T) (1 - cos wt) + i sin wt ]  + discrete modes
 *
 * | symbol | variable | unit |
 * | t | timePs, or grid { stepPs, samples } | ps |
 * | T | temperatureK | K |
 * | g0 | re, im | 1 |
 *
 * Source: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8; the linear term -i (lambda/hbar) t of g is
 * left out, because the engine's frame rotates at the zero-phonon energy.
 */
import { toContinuum } from './bath/registry'
import { thermalFrequencyOf } from './constants'
import { addModesAt, resolveModes } from './discrete-modes'
import { buildFrequencyPanels } from './frequency-panels'
import type { LineBroadening, Phonons, TimeGrid } from './types'

/** g0 at any times >= 0, in any order. */
export const lineBroadeningAt = (phonons: Phonons, temperatureK: number, timesPs: Float64Array): LineBroadening => {
  const th = thermalFrequencyOf(temperatureK)
  const longest = timesPs.reduce((a, b) => Math.max(a, b), 0)
  const terms = phonons.bath
    .filter((term) => term.couplingStrength > 0)
    .map((term) => buildFrequencyPanels(toContinuum(term), th, longest))
  const modes = resolveModes(phonons.modes, temperatureK)
  const re = new Float64Array(timesPs.length)
  const im = new Float64Array(timesPs.length)
  const out = new Float64Array(2)
  timesPs.forEach((time, index) => {
    out.fill(0)
    for (const term of terms) term.addAt(time, out)
    addModesAt(modes, time, out)
    re[index] = out[0]!
    im[index] = out[1]!
  })
  const errorEstimate = terms.reduce((worst, term) => Math.max(worst, term.errorEstimate), 1e-15)
  return { re, im, errorEstimate, method: 'Legendre panels in frequency' }
}

/** g0 on a uniform time grid. */
export const lineBroadening = (phonons: Phonons, temperatureK: number, grid: TimeGrid): LineBroadening =>
  lineBroadeningAt(
    phonons,
    temperatureK,
    Float64Array.from({ length: grid.samples }, (_, j) => j * grid.stepPs),
  )
