import { describe, expect, it } from 'vitest'
import { demoSets, sampleA1, sampleB2 } from '../../scripts/demo/scenario'
import { makeDemoSpectra } from '../../scripts/demo/spectra'
import { fitScaleOffset } from '../../shared/engine/compare'
import { computePreview } from '../../shared/engine/preview'
import { proposeTable } from '../../shared/measurement/propose-table'
import { readTable } from '../../shared/measurement/read-table'
import { ParameterSetSchema, type ParameterSetInput } from '../../shared/schemas/parameter-set'

const spectra = makeDemoSpectra()

const reducedChiSquare = (index: number, input: ParameterSetInput): number => {
  const spectrum = spectra[index]
  if (spectrum === undefined) throw new Error(`no spectrum ${index}`)
  const curve = computePreview(ParameterSetSchema.parse(input), spectrum.temperatureK, 0)[spectrum.kind]
  if (curve === null) throw new Error('no curve')
  const measured = readTable(spectrum.content, proposeTable(spectrum.content).reading)
  const fit = fitScaleOffset(measured, { energiesMeV: curve.energiesMeV, values: curve.perMeV })
  if (!fit.ok) throw new Error(fit.message)
  return fit.reducedChiSquare ?? Infinity
}

describe('the invented spectra of the demo', () => {
  it('are the same on every run', () => {
    const texts = (list: typeof spectra) => list.map(({ content }) => String(content))
    expect(texts(makeDemoSpectra())).toEqual(texts(spectra))
  })

  it.each(spectra)(
    '$fileName says that it is invented and leaves no question open',
    ({ content, fileName, name, note }) => {
      expect(String(content).split(/\r?\n/, 1)[0]).toMatch(/INVENTED DATA/)
      expect(fileName).toMatch(/^invented-/)
      expect(name).toMatch(/\(invented\)/)
      expect(note).toMatch(/^Invented/)
      expect(proposeTable(content).needsAnswer).toEqual([])
    },
  )

  it('come in every unit, with decimal points and commas', () => {
    const readings = spectra.map(({ content }) => proposeTable(content).reading)
    expect([...new Set(readings.map(({ axisUnit }) => axisUnit))].sort()).toEqual(['cm^-1', 'eV', 'meV', 'nm'])
    expect([...new Set(readings.map(({ decimalMark }) => decimalMark))].sort()).toEqual(['comma', 'point'])
    expect(new Set(readings.map(({ delimiter }) => delimiter)).size).toBe(4)
  })

  // Through file, reader, wavelength factor and fit, the model that made the data must come out within its noise:
  // for N points chi-square per degree of freedom is 1 +- sqrt(2/N), here 0.08; five of these are allowed.
  it.each([
    [0, sampleA1],
    [1, sampleA1],
    [3, sampleA1],
    [4, sampleB2],
  ])('number %i agrees with its own model within the noise', (index, set) => {
    const found = reducedChiSquare(index, set)
    expect(found).toBeGreaterThan(0.6)
    expect(found).toBeLessThan(1.4)
  })

  it('tell the model from its rivals', () => {
    // 2 is 13 standard deviations of chi-square from 1.
    const rivals = demoSets.filter(({ name }) => name.includes('A1 (invented),'))
    expect(rivals).toHaveLength(2)
    for (const { versions } of rivals)
      expect(reducedChiSquare(0, versions.at(-1)?.parameters ?? sampleA1)).toBeGreaterThan(2)
  })
})
