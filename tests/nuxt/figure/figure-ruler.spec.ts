import { mountSuspended } from '@nuxt/test-utils/runtime'
import { afterEach, describe, expect, it, vi } from 'vitest'
import FigureRuler from '~/components/figure/FigureRuler.vue'

const values = [4, 50, 100, 200, 300]
const mountRuler = async (change: Record<string, unknown> = {}) => {
  const wrapper = await mountSuspended(FigureRuler, {
    props: {
      modelValue: 1,
      values,
      label: 'temperature',
      unit: 'K',
      'onUpdate:modelValue': (value: number) => void wrapper.setProps({ modelValue: value }),
      ...change,
    },
  })
  return wrapper
}
const press = async (wrapper: Awaited<ReturnType<typeof mountRuler>>, key: string) => {
  await wrapper.get('[role=slider]').trigger('keydown', { key })
  await wrapper.vm.$nextTick()
  return wrapper.get('[role=slider]').attributes('aria-valuetext')
}

afterEach(() => vi.useRealTimers())

describe('ruler', () => {
  it('is a slider that says its true value with unit', async () => {
    const wrapper = await mountRuler()
    const slider = wrapper.get('[role=slider]')
    expect(slider.attributes()).toMatchObject({
      'aria-label': 'temperature (K)',
      'aria-valuemin': '0',
      'aria-valuemax': '4',
      'aria-valuenow': '1',
      'aria-valuetext': '50 K',
      tabindex: '0',
    })
    expect(wrapper.get('output').text()).toBe('50 K')
  })

  it('moves by arrow and page keys, Home and End, and stops at the ends', async () => {
    const wrapper = await mountRuler()
    expect(await press(wrapper, 'ArrowRight')).toBe('100 K')
    expect(await press(wrapper, 'ArrowUp')).toBe('200 K')
    expect(await press(wrapper, 'ArrowLeft')).toBe('100 K')
    expect(await press(wrapper, 'ArrowDown')).toBe('50 K')
    expect(await press(wrapper, 'PageUp')).toBe('200 K')
    expect(await press(wrapper, 'PageDown')).toBe('50 K')
    expect(await press(wrapper, 'End')).toBe('300 K')
    expect(await press(wrapper, 'ArrowRight')).toBe('300 K')
    expect(await press(wrapper, 'Home')).toBe('4 K')
    expect(await press(wrapper, 'ArrowLeft')).toBe('4 K')
    expect(await press(wrapper, 'x')).toBe('4 K')
  })

  it('plays through the values, starts over, and stops on the next key', async () => {
    vi.useFakeTimers()
    const wrapper = await mountRuler({ modelValue: 3 })
    const button = wrapper.get('button')
    expect(button.attributes('aria-label')).toBe('Play temperature')
    await button.trigger('click')
    expect(wrapper.get('output').text()).toBe('300 K')
    expect(button.attributes('aria-label')).toBe('Stop playing temperature')
    await vi.advanceTimersByTimeAsync(750)
    expect(wrapper.get('output').text()).toBe('4 K')
    expect(await press(wrapper, 'ArrowRight')).toBe('50 K')
    await vi.advanceTimersByTimeAsync(3000)
    expect(wrapper.get('output').text()).toBe('50 K')
  })

  it('takes an index beyond its values as the last one, and nothing while disabled', async () => {
    const wrapper = await mountRuler({ modelValue: 99 })
    expect(wrapper.get('output').text()).toBe('300 K')
    await wrapper.setProps({ disabled: true, modelValue: 1 })
    expect(await press(wrapper, 'End')).toBe('50 K')
    expect(wrapper.get('[role=slider]').attributes('tabindex')).toBe('-1')
  })

  it('stands empty without values', async () => {
    const wrapper = await mountRuler({ values: [] })
    expect(wrapper.get('output').text()).toBe('–')
    expect(wrapper.get('button').attributes('disabled')).toBeDefined()
  })
})
