import { describe, expect, it } from 'vitest'
import { BOLTZMANN_MEV_PER_K, HBAR_MEV_PS, HC_MEV_NM, PLANCK_MEV_PS } from '../../shared/engine/constants'
import { zeroPhononFwhmAt } from '../../shared/engine/linewidth'
import { modelAt } from '../../shared/engine/model'
import { modelWarnings } from '../../shared/engine/model-warnings'
import reference from './reference/line-shape-values.json'
import { parameterSet, powerLaw, relativeError } from './support'

describe('constants', () => {
  it('carry the digits of CODATA 2022', () => {
    expect(relativeError(HBAR_MEV_PS, 0.6582119569509066)).toBeLessThan(3e-16)
    expect(relativeError(PLANCK_MEV_PS, 4.135667696923859)).toBeLessThan(3e-16)
    expect(relativeError(BOLTZMANN_MEV_PER_K, 0.08617333262145177)).toBeLessThan(3e-16)
    expect(relativeError(HC_MEV_NM, 1239841.984332003)).toBeLessThan(3e-16)
  })
})

describe('temperature law of the zero-phonon width', () => {
  it('equals the reference values (twelve digits)', () => {
    for (const row of reference.rudin_linewidth) {
      const set = {
        zeroPhononFwhmMeV: row.gamma0_meV,
        acousticBroadeningMeVPerK: row.gamma_ac_meV_per_K,
        opticalBroadeningMeV: row.Gamma_LO_meV,
        opticalPhononEnergyMeV: row.hw_LO_meV,
      }
      expect(relativeError(zeroPhononFwhmAt(set, row.T_K), row.Gamma_meV)).toBeLessThan(1e-11)
    }
  })

  it('is Gamma_0 at 0 K and ignores the optical term without an energy', () => {
    const set = parameterSet({ zeroPhononFwhmMeV: 0.3, opticalBroadeningMeV: 50, opticalPhononEnergyMeV: 26 })
    expect(zeroPhononFwhmAt(set, 0)).toBe(0.3)
    expect(zeroPhononFwhmAt({ ...set, opticalPhononEnergyMeV: undefined }, 300)).toBe(0.3)
  })
})

describe('model at one temperature', () => {
  it('resolves the width and keeps everything else', () => {
    const set = parameterSet({
      bath: [powerLaw()],
      zeroPhononFwhmMeV: 0.2,
      acousticBroadeningMeVPerK: 0.01,
      ensembleFwhmMeV: 3,
    })
    const model = modelAt(set, 50)
    expect(model.zeroPhononFwhmMeV).toBeCloseTo(0.7, 14)
    expect(model.populationLifetimePs).toBe(Infinity)
    expect(model).toMatchObject({ temperatureK: 50, ensembleFwhmMeV: 3, bath: set.bath, zeroPhononEnergyMeV: 2000 })
    expect(modelAt({ ...set, populationLifetimePs: 400 }, 50).populationLifetimePs).toBe(400)
  })

  it('takes the given width as the total one: a lifetime adds no width', () => {
    const set = parameterSet({ zeroPhononFwhmMeV: 0.2, populationLifetimePs: 100 })
    expect(modelAt(set, 4).zeroPhononFwhmMeV).toBe(0.2)
    expect(modelWarnings(set)).toEqual([])
  })

  it('warns of a width below the lifetime limit hbar/T1', () => {
    const [warning, ...others] = modelWarnings(parameterSet({ zeroPhononFwhmMeV: 0.002, populationLifetimePs: 100 }))
    expect(others).toEqual([])
    expect(warning).toMatch(/zeroPhononFwhmMeV.*0\.002 meV at 4 K.*0\.006582 meV.*100 ps/)
    expect(modelWarnings(parameterSet({ zeroPhononFwhmMeV: 0.007, populationLifetimePs: 100 }))).toEqual([])
  })

  it('warns of acoustic broadening beside a term that broadens by itself', () => {
    const set = parameterSet({
      acousticBroadeningMeVPerK: 0.01,
      bath: [powerLaw(), powerLaw({ exponent: 1, couplingStrength: 0.02 })],
    })
    const warnings = modelWarnings(set)
    expect(warnings).toHaveLength(1)
    // 2 pi a k_B = 0.010829 meV/K
    expect(warnings[0]).toMatch(/bath\.1.*0\.01083 meV\/K.*acousticBroadeningMeVPerK = 0\.01/)
    expect(modelWarnings({ ...set, acousticBroadeningMeVPerK: 0 })).toEqual([])
    expect(modelWarnings({ ...set, bath: [powerLaw()] })).toEqual([])
  })

  it('warns of optical broadening beside a damped vibration of the same energy', () => {
    const vibration = { kind: 'underdamped' as const, huangRhys: 0.2, energyMeV: 26, dampingEnergyMeV: 1 }
    const set = parameterSet({ opticalBroadeningMeV: 40, opticalPhononEnergyMeV: 26.5, bath: [vibration] })
    expect(modelWarnings(set)).toHaveLength(1)
    expect(modelWarnings(set)[0]).toMatch(/bath\.0.*26 meV.*opticalBroadeningMeV = 40.*26\.5/)
    expect(modelWarnings({ ...set, opticalPhononEnergyMeV: 30 })).toEqual([])
  })
})
