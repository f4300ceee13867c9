// @vitest-environment happy-dom
import { mount } from '@vue/test-utils'
import { afterEach, describe, expect, it } from 'vitest'
import UiNumberField from '../../../../app/components/ui/UiNumberField.vue'

function field(props: { modelValue?: number | null, step?: number, decimals?: number } = {}) {
  const wrapper = mount(UiNumberField, {
    attachTo: document.body,
    props: { 'label': 'Pressure', 'unit': 'mmHg', 'onUpdate:modelValue': (value: number | null) => wrapper.setProps({ modelValue: value }), ...props },
    global: { stubs: { Icon: true } },
  })
  return wrapper
}
afterEach(() => { document.body.innerHTML = '' })

describe('a number field', () => {
  it('gives the number that was typed, and null again when it is emptied', async () => {
    const wrapper = field()
    await wrapper.get('input').setValue('34')
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([34])
    await wrapper.get('input').setValue('')
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([null])
  })

  it('keeps unreadable text on screen, says so, and gives no number', async () => {
    const wrapper = field({ modelValue: 17 })
    await wrapper.get('input').setValue('17 or so')
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([null])
    expect(wrapper.get('input').element.value).toBe('17 or so')
    expect(wrapper.get('input').attributes('aria-invalid')).toBe('true')
    expect(wrapper.emitted('unreadable')!.at(-1)).toEqual([true])
  })

  it('does not rewrite what is being typed', async () => {
    const wrapper = field()
    await wrapper.get('input').setValue('20.')
    expect(wrapper.get('input').element.value).toBe('20.')
  })

  it('steps up and down without the noise of binary fractions', async () => {
    const wrapper = field({ modelValue: 0.2, step: 0.1 })
    await wrapper.get('input').trigger('keydown', { key: 'ArrowUp' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([0.3])
  })

  it('reads its unit with its name', () => {
    const input = field().get('input')
    const described = input.attributes('aria-describedby')!.split(' ').map(id => document.getElementById(id)?.textContent)
    expect(described).toContain('mmHg')
  })
})
