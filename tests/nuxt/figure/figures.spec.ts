import { mountSuspended } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import FigureLines from '~/components/figure/FigureLines.vue'
import FigureMap from '~/components/figure/FigureMap.vue'

const x = Float64Array.from({ length: 201 }, (_, i) => 1990 + 0.1 * i)
const y = x.map((e) => 1 / (1 + (e - 2000) ** 2))
const lines = { series: [{ id: 'a', label: '4 K', role: 'simulation' as const, x, y }] }
const labels = { xLabel: 'photon energy (meV)', yLabel: 'absorption (1/meV)' }

describe('figure of curves', () => {
  it('says in words what it shows', async () => {
    const wrapper = await mountSuspended(FigureLines, { props: { ...lines, ...labels, name: 'Flake' } })
    const image = wrapper.get('[role=img]')
    expect(image.attributes('tabindex')).toBe('0')
    expect(image.attributes('aria-label')).toBe(
      'Flake. absorption against photon energy. 4 K (simulation): maximum 1 1/meV at 2000 meV.',
    )
  })

  it('reads out values by keyboard', async () => {
    const wrapper = await mountSuspended(FigureLines, { props: { ...lines, ...labels } })
    const image = wrapper.get('[role=img]')
    const read = async (key: string, shiftKey = false) => {
      await image.trigger('keydown', { key, shiftKey })
      return wrapper.get('output').text()
    }
    expect(await read('ArrowRight')).toBe('4 K: 2000 meV, 1 1/meV')
    expect(await read('ArrowRight')).toBe('4 K: 2000.1 meV, 0.990099 1/meV')
    expect(await read('ArrowLeft', true)).toBe('4 K: 1999.1 meV, 0.552486 1/meV')
    expect(await read('End')).toMatch(/^4 K: 2010 meV/)
    expect(await read('Escape')).toBe('')
  })

  it('has its data as a table, with units in the heads', async () => {
    const wrapper = await mountSuspended(FigureLines, { props: { ...lines, ...labels, name: 'Flake' } })
    expect(wrapper.find('table').exists()).toBe(false)
    const button = wrapper.findAll('button').find((one) => one.text().includes('Table'))
    await button?.trigger('click')
    expect(button?.attributes('aria-expanded')).toBe('true')
    expect(wrapper.findAll('thead th').map((cell) => cell.text())).toEqual([
      'photon energy (meV)',
      'absorption (1/meV)',
    ])
    expect(wrapper.findAll('tbody tr').length).toBeGreaterThan(50)
    expect(wrapper.get('tbody tr').text()).toContain('1990')
  })

  it('offers every file under its own name', async () => {
    const wrapper = await mountSuspended(FigureLines, { props: { ...lines, ...labels, name: 'Flake' } })
    const names = wrapper.findAll('button').map((one) => one.attributes('aria-label'))
    expect(names).toEqual(expect.arrayContaining(['Save Flake as SVG', 'Save Flake as PNG', 'Save Flake as CSV']))
  })
})

describe('map', () => {
  const axis = Float64Array.from({ length: 11 }, (_, i) => 1995 + i)
  const values = new Float64Array(121)
  values[7 * 11 + 4] = 2
  values[5 * 11 + 5] = -1
  const map = {
    energies1: axis,
    energies3: axis,
    values,
    signed: true,
    xLabel: 'excitation energy (meV)',
    yLabel: 'detection energy (meV)',
    valueLabel: 'absorptive (1)',
  }

  it('says in words where its extremes lie', async () => {
    const wrapper = await mountSuspended(FigureMap, { props: map })
    expect(wrapper.get('[role=img]').attributes('aria-label')).toBe(
      'absorptive over excitation energy and detection energy. Maximum 2 at excitation 2002, detection 1999 meV; ' +
        'minimum −1 at excitation 2000, detection 2000 meV.',
    )
  })

  it('moves the marked place by keyboard, from the largest magnitude on, and not out of the map', async () => {
    const wrapper = await mountSuspended(FigureMap, {
      props: { ...map, 'onUpdate:place': (place: unknown) => void wrapper.setProps({ place: place as never }) },
    })
    const read = async (key: string, shiftKey = false) => {
      await wrapper.get('[role=img]').trigger('keydown', { key, shiftKey })
      await wrapper.vm.$nextTick()
      return wrapper.get('output').text()
    }
    expect(await read('ArrowRight')).toBe('excitation 2002 meV, detection 1999 meV: 2')
    expect(await read('ArrowUp')).toBe('excitation 2002 meV, detection 2000 meV: 0')
    expect(await read('ArrowLeft')).toBe('excitation 2001 meV, detection 2000 meV: 0')
    expect(await read('ArrowLeft')).toBe('excitation 2000 meV, detection 2000 meV: −1')
    expect(await read('ArrowLeft', true)).toBe('excitation 1995 meV, detection 2000 meV: 0')
    expect(await read('Home')).toBe('excitation 2002 meV, detection 1999 meV: 2')
    expect(await read('Escape')).toBe('')
  })
})
