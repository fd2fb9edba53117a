import { mountSuspended } from '@nuxt/test-utils/runtime'
import { afterEach, describe, expect, it } from 'vitest'
import { nextTick } from 'vue'
import ParameterTable from '~/components/parameter/ParameterTable.vue'
import { newDraft, type DraftSet } from '~/utils/draft'

const mounted: { unmount: () => void }[] = []
afterEach(() => mounted.splice(0).forEach((each) => each.unmount()))

/** A table that keeps what it emits, as a page does. */
const mountTable = async (draft: DraftSet = newDraft(), props: Record<string, unknown> = {}) => {
  const wrapper = await mountSuspended(ParameterTable, {
    attachTo: document.body,
    props: {
      modelValue: draft,
      'onUpdate:modelValue': (next: DraftSet) => void wrapper.setProps({ modelValue: next }),
      ...props,
    },
  })
  mounted.push(wrapper)
  const field = (path: string) => {
    const found = wrapper.find<HTMLInputElement>(`[data-path="${path}"]`)
    if (!found.exists()) throw new Error(`no field ${path}`)
    return found
  }
  const type = async (path: string, text: string) => {
    await field(path).trigger('focus')
    await field(path).setValue(text)
  }
  const leave = async (path: string) => {
    await field(path).trigger('blur')
    await nextTick()
  }
  const set = () => wrapper.props('modelValue') as unknown as Record<string, unknown>
  return { wrapper, field, type, leave, set }
}

describe('typing values', () => {
  it('stores the unit of the set, whatever unit was typed, and prints it when the field is left', async () => {
    const { field, type, leave, set } = await mountTable()
    await type('bath[0].cutoffEnergyMeV', '2 eV')
    expect(set()).toMatchObject({ bath: [{ cutoffEnergyMeV: 2000 }] })
    expect(field('bath[0].cutoffEnergyMeV').element.value).toBe('2 eV')
    await leave('bath[0].cutoffEnergyMeV')
    expect(field('bath[0].cutoffEnergyMeV').element.value).toBe('2000')
  })

  it('takes a wavelength for a photon energy only', async () => {
    const { type, leave, set, wrapper } = await mountTable()
    await type('zeroPhononEnergyMeV', '620 nm')
    expect(set().zeroPhononEnergyMeV).toBeCloseTo(1999.745136, 5)
    await type('zeroPhononFwhmMeV', '620 nm')
    await leave('zeroPhononFwhmMeV')
    expect(wrapper.text()).toContain('a wavelength gives a photon energy, not the zero-phonon width at 0 K')
  })

  it('keeps text that is no number and says what was found, beside the field', async () => {
    const { field, type, leave, set, wrapper } = await mountTable()
    await type('bath[0].couplingStrength', 'lots')
    await leave('bath[0].couplingStrength')
    expect(set()).toMatchObject({ bath: [{ couplingStrength: 'lots' }] })
    const describedBy = field('bath[0].couplingStrength').attributes('aria-describedby') ?? ''
    const error = wrapper.find(`[id="${describedBy.split(' ')[1]}"]`)
    expect(error.text()).toBe('expected coupling strength as a number; found "lots"')
    expect(field('bath[0].couplingStrength').attributes('aria-invalid')).toBe('true')
  })

  it("refuses a value out of range with the server's own sentence", async () => {
    const { type, leave, wrapper } = await mountTable()
    await type('bath[0].exponent', '7')
    await leave('bath[0].exponent')
    expect(wrapper.text()).toContain('expected exponent as a number, above 0, up to 6; found 7')
  })

  it('an emptied optional field leaves the set, an emptied required one is refused', async () => {
    const { type, leave, set, wrapper } = await mountTable({ ...newDraft(), populationLifetimePs: 40 })
    await type('populationLifetimePs', '')
    expect(set()).not.toHaveProperty('populationLifetimePs')
    await type('zeroPhononEnergyMeV', '')
    await leave('zeroPhononEnergyMeV')
    expect(wrapper.text()).toContain('expected zero-phonon energy as a number, 1 to 20000 meV; found nothing')
  })

  it('names the rule that ties two fields', async () => {
    const { type, leave, wrapper } = await mountTable()
    await type('opticalBroadeningMeV', '20')
    await leave('opticalBroadeningMeV')
    expect(wrapper.text()).toContain('expected an optical-phonon energy, because an optical-phonon broadening is given')
  })
})

describe('keyboard', () => {
  it.each([
    ['ArrowUp', {}, 0.31],
    ['ArrowDown', {}, 0.29],
    ['ArrowUp', { shiftKey: true }, 0.301],
    ['PageUp', {}, 0.4],
  ])('%s %o steps the value', async (key, modifiers, expected) => {
    const { field, set } = await mountTable()
    await field('bath[0].couplingStrength').trigger('focus')
    await field('bath[0].couplingStrength').trigger('keydown', { key, ...modifiers })
    expect(set()).toMatchObject({ bath: [{ couplingStrength: expected }] })
    expect(field('bath[0].couplingStrength').element.value).toBe(String(expected))
  })

  it('Enter goes to the next field, Shift+Enter back', async () => {
    const { field } = await mountTable()
    field('zeroPhononEnergyMeV').element.focus()
    await field('zeroPhononEnergyMeV').trigger('keydown', { key: 'Enter' })
    expect(document.activeElement).toBe(field('populationLifetimePs').element)
    await field('populationLifetimePs').trigger('keydown', { key: 'Enter', shiftKey: true })
    expect(document.activeElement).toBe(field('zeroPhononEnergyMeV').element)
  })

  it('Escape brings back what stood there', async () => {
    const { field, type, set } = await mountTable()
    await type('zeroPhononFwhmMeV', '9')
    await field('zeroPhononFwhmMeV').trigger('keydown', { key: 'Escape' })
    expect(set()).toMatchObject({ zeroPhononFwhmMeV: 0.1 })
  })
})

describe('lists', () => {
  it('reads values with one unit for all and sorts them when the field is left', async () => {
    const { field, type, leave, set } = await mountTable()
    await type('waitingTimesPs', '1000, 0, 500 fs')
    expect(set()).toMatchObject({ waitingTimesPs: [1, 0, 0.5] })
    await leave('waitingTimesPs')
    expect(set()).toMatchObject({ waitingTimesPs: [0, 0.5, 1] })
    expect(field('waitingTimesPs').element.value).toBe('0, 0.5, 1')
  })

  it('names the place of a wrong value', async () => {
    const { type, leave, wrapper } = await mountTable()
    await type('temperaturesK', '4, 20, 700')
    await leave('temperaturesK')
    expect(wrapper.text()).toContain('value 3: expected temperature as a number, 0 to 600 K; found 700')
  })
})

describe('rows that come and go', () => {
  it('adds and removes modes and bath terms', async () => {
    const { wrapper, set } = await mountTable()
    const button = (name: string) => wrapper.findAll('button').find((each) => each.text().trim() === name)
    await button('Add mode')?.trigger('click')
    expect(set()).toMatchObject({ modes: [{ energyMeV: 10, huangRhys: 0.1 }] })
    await wrapper.find('[aria-label="Remove mode 1"]').trigger('click')
    expect(set()).toMatchObject({ modes: [] })
    await button('Add term')?.trigger('click')
    expect(set()).toMatchObject({ bath: [{ kind: 'powerLaw' }, { kind: 'powerLaw' }] })
    await wrapper.find('[aria-label="Remove bath term 1"]').trigger('click')
    expect(set()).toMatchObject({ bath: [{ kind: 'powerLaw' }] })
  })

  it('a laser begins at the zero-phonon energy and leaves without a trace', async () => {
    const { wrapper, set } = await mountTable()
    const choice = wrapper.find('[aria-label="Laser spectrum"]')
    await choice.setValue('gaussian')
    expect(set()).toMatchObject({ laser: { centerMeV: 2000 } })
    await choice.setValue('none')
    expect(set()).not.toHaveProperty('laser')
  })

  it('an emptied grid override leaves the set as if it had never been there', async () => {
    const { type, set } = await mountTable()
    await type('grid.linearSamples', '4096')
    expect(set()).toMatchObject({ grid: { linearSamples: 4096 } })
    await type('grid.linearSamples', '')
    expect(set()).not.toHaveProperty('grid')
  })
})

describe('reading', () => {
  it('shows values without fields to a viewer', async () => {
    const { wrapper } = await mountTable(newDraft(), { readonly: true })
    expect(wrapper.findAll('input, select, textarea')).toHaveLength(0)
    expect(wrapper.text()).toContain('2000')
  })

  it('puts two versions side by side and marks what differs', async () => {
    const other = { ...newDraft(), zeroPhononFwhmMeV: 0.2 }
    const { wrapper } = await mountTable(newDraft(), { readonly: true, other, otherLabel: 'v1', label: 'v2' })
    const row = wrapper.findAll('tr').find((each) => each.text().startsWith('zero-phonon width at 0 K'))
    const [before, after] = row?.findAll('td.value') ?? []
    expect(before?.text()).toBe('0.2')
    expect(after?.text()).toContain('differs')
    expect(after?.text()).toContain('0.1')
    expect(wrapper.findAll('[title="differs"]')).toHaveLength(1)
  })
})
