import { describe, expect, it } from 'vitest'
import { parseList } from '../../../app/utils/parse-list'
import { quantities } from '../../../shared/schemas/quantities'

describe('a list of values as typed', () => {
  it.each([
    ['4, 20, 77', 'temperatureK', [4, 20, 77]],
    ['4, 20, 77 K', 'temperatureK', [4, 20, 77]],
    ['4 20 77', 'temperatureK', [4, 20, 77]],
    ['4;20;77', 'temperatureK', [4, 20, 77]],
    ['4 K, 20 K', 'temperatureK', [4, 20]],
    ['4\n20\n', 'temperatureK', [4, 20]],
    ['0, 500, 1000 fs', 'waitingTimesPs', [0, 0.5, 1]],
    ['500 fs, 2 ps', 'waitingTimesPs', [0.5, 2]],
    ['1e3 fs', 'waitingTimesPs', [1]],
    ['0 to 2 step 0.5', 'waitingTimesPs', [0, 0.5, 1, 1.5, 2]],
    ['0 to 500 step 250 fs', 'waitingTimesPs', [0, 0.25, 0.5]],
    ['0 to 0.3 step 0.1 ps', 'waitingTimesPs', [0, 0.1, 0.2, 0.3]],
    ['', 'temperatureK', []],
  ] as const)('%j', (text, key, expected) => {
    const quantity = key === 'waitingTimesPs' ? quantities.waitingTimePs : quantities[key]
    expect(parseList(text, quantity)).toEqual(expected)
  })

  it.each([
    ['4, many', [4, 'many']],
    ['4, 20 meV', [4, '20 meV']],
    ['0 to 10 step 0', ['0 to 10 step 0']],
    ['10 to 0 step 1', ['10 to 0 step 1']],
    ['0 to 600 step 1e-6', ['0 to 600 step 1e-6']],
  ])('%j keeps what it cannot read', (text, expected) =>
    expect(parseList(text, quantities.temperatureK)).toEqual(expected),
  )
})
