// @vitest-environment happy-dom
import { mount } from '@vue/test-utils'
import { afterEach, describe, expect, it } from 'vitest'
import UiOptionChips from '../../../../app/components/ui/UiOptionChips.vue'

const options = [{ value: 'sealed', label: 'Sealed' }, { value: 'gaping', label: 'Gaping', disabled: true }, { value: 'leaking', label: 'Leaking' }]

function chips(props: Record<string, unknown> = {}) {
  const wrapper = mount(UiOptionChips as never, {
    attachTo: document.body,
    props: { options, 'label': 'Wound', 'onUpdate:modelValue': (value: unknown) => wrapper.setProps({ modelValue: value } as never), ...props } as never,
  })
  return wrapper
}
afterEach(() => { document.body.innerHTML = '' })

describe('option chips', () => {
  it('are a named radio group with nothing chosen', () => {
    const wrapper = chips()
    expect(wrapper.get('[role=radiogroup]').attributes('aria-label')).toBe('Wound')
    expect(wrapper.findAll('input:checked')).toHaveLength(0)
  })

  it('step with arrows, over what cannot be chosen', async () => {
    const wrapper = chips({ modelValue: 'sealed' })
    await wrapper.findAll('input')[0]!.trigger('keydown', { key: 'ArrowRight' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual(['leaking'])
    expect((document.activeElement as HTMLInputElement).value).toBe('leaking')
    await wrapper.findAll('input')[2]!.trigger('keydown', { key: 'ArrowRight' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual(['sealed'])
  })

  it('clear with Backspace, or when the chosen one is pressed again', async () => {
    const wrapper = chips({ modelValue: 'sealed' })
    await wrapper.findAll('input')[0]!.trigger('keydown', { key: 'Backspace' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([null])
    await wrapper.setProps({ modelValue: 'leaking' } as never)
    await wrapper.findAll('input')[2]!.trigger('pointerdown')
    await wrapper.findAll('input')[2]!.trigger('click')
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([null])
  })

  it('keep the choice where it may not be taken back', async () => {
    const wrapper = chips({ modelValue: 'sealed', clearable: false })
    await wrapper.findAll('input')[0]!.trigger('keydown', { key: 'Backspace' })
    await wrapper.findAll('input')[0]!.trigger('pointerdown')
    await wrapper.findAll('input')[0]!.trigger('click')
    expect(wrapper.emitted('update:modelValue')).toBeUndefined()
  })
})
