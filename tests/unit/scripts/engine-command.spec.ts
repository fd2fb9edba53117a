import { spawnSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { describe, expect, it } from 'vitest'

const command = fileURLToPath(new URL('../../../scripts/engine.mjs', import.meta.url))
const run = (args: string[], input = '') => spawnSync(process.execPath, [command, ...args], { input, encoding: 'utf8' })

describe('the engine on the command line', () => {
  it('answers requests from standard input as JSON', () => {
    const request = [{ id: 7, quantity: 'lorentzianFwhm', parameters: { coherenceTimesPs: [1.36, 5.2] } }]
    const { status, stdout, stderr } = run(['evaluate', '-'], JSON.stringify(request))
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' })
    // FWHM = 2 hbar / T2, to 12 digits.
    expect(JSON.parse(stdout)).toEqual([
      {
        id: 7,
        quantity: 'lorentzianFwhm',
        values: { fwhmMeV: [expect.closeTo(0.9679587602219214, 12), expect.closeTo(0.2531584449811179, 12)] },
      },
    ])
  }, 60_000)

  it('says every wrong place, writes nothing and ends with status 2', () => {
    const request = [
      { quantity: 'moments', parameters: { temperatureK: -1 } },
      { quantity: 'moments', parameters: { temperatureK: 'cold' } },
    ]
    const { status, stdout, stderr } = run(['evaluate', '-'], JSON.stringify(request))
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' })
    expect(stderr.trim().split('\n')).toEqual([
      expect.stringMatching(/^\$\[0\]\.parameters\.temperatureK: expected .*found -1$/),
      expect.stringMatching(/^\$\[1\]\.parameters\.temperatureK: expected .*found the text "cold"$/),
    ])
  }, 60_000)

  it.each([
    [['evaluate'], '', 'FILE: expected the path of a JSON file'],
    [['evaluate', 'nowhere.json'], '', 'nowhere.json: expected a file that can be read'],
    [['evaluate', '-'], '{', '$: expected JSON'],
    [
      ['modes', '--radius-nm', '0', '--longitudinal', '3700', '--transverse', '1540'],
      '',
      'modes: radiusNm: expected a number above 0',
    ],
    [['modes', '--radius', '3'], '', 'modes: Unknown option'],
    [
      ['modes', '--radius-nm', '3', '--longitudinal', '3,7', '--transverse', '1540'],
      '',
      '--longitudinal: expected a number of m/s; found "3,7"',
    ],
    [['other'], '', 'command: expected evaluate or modes; found "other"'],
  ])(
    'refuses %j',
    (args, input, start) => {
      const { status, stdout, stderr } = run(args, input)
      expect({ status, stdout }).toEqual({ status: 2, stdout: '' })
      expect(stderr.startsWith(start)).toBe(true)
    },
    60_000,
  )

  it('lists the modes of a sphere in a matrix by energy, with their damping', () => {
    const args = ['modes', '--radius-nm', '3.3', '--longitudinal', '4250', '--transverse', '1860', '--density', '4820']
    const { status, stdout } = run([...args, '--matrix', '2200,5950,3760', '--count', '1', '--highest-l', '1'])
    expect(status).toBe(0)
    const { modes } = JSON.parse(stdout) as {
      modes: { family: string; l: number; wavenumberPerCm: number; decayPerPs: number }[]
    }
    expect(modes.map(({ wavenumberPerCm }) => wavenumberPerCm)).toEqual(
      modes.map((mode) => mode.wavenumberPerCm).sort((a, b) => a - b),
    )
    const torsional = modes.find(({ family, l }) => family === 'torsional' && l === 1)!
    // Published 10.6 - 1.50 i cm^-1 (source paper not identified, from memory).
    expect(torsional.wavenumberPerCm).toBeCloseTo(10.6, 1)
    expect(torsional.decayPerPs).toBeGreaterThan(0)
  }, 60_000)
})
