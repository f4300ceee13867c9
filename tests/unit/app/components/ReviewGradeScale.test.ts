// @vitest-environment happy-dom
import { mount } from '@vue/test-utils'
import { afterEach, describe, expect, it } from 'vitest'
import ReviewGradeScale from '../../../../app/components/review/ReviewGradeScale.vue'

function scale(props: Record<string, unknown> = {}) {
  const wrapper = mount(ReviewGradeScale as never, {
    attachTo: document.body,
    props: { 'kind': 'cells', 'label': 'Cells', 'onUpdate:modelValue': (value: unknown) => wrapper.setProps({ modelValue: value } as never), ...props } as never,
  })
  return wrapper
}
afterEach(() => { document.body.innerHTML = '' })

describe('a grade scale', () => {
  it('starts with nothing chosen', () => {
    const wrapper = scale()
    expect(wrapper.findAll('input').some(input => (input.element as HTMLInputElement).checked)).toBe(false)
  })

  it('chooses by number, with 5 for 0.5+, and moves the focus there', async () => {
    const wrapper = scale()
    await wrapper.get('input').trigger('keydown', { key: '5' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual(['0.5+'])
    await wrapper.get('input').trigger('keydown', { key: '3' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual(['3+'])
    expect((document.activeElement as HTMLInputElement).value).toBe('3+')
  })

  it('gives oedema as a number, 0 included', async () => {
    const wrapper = scale({ kind: 'oedema', label: 'Corneal oedema' })
    await wrapper.get('input').trigger('keydown', { key: '0' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([0])
  })

  it('steps with arrows and goes round', async () => {
    const wrapper = scale({ modelValue: '4+' })
    await wrapper.findAll('input')[5]!.trigger('keydown', { key: 'ArrowRight' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual(['0'])
    await wrapper.findAll('input')[0]!.trigger('keydown', { key: 'ArrowLeft' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual(['4+'])
  })

  it('goes back to not recorded with Backspace, which is not the same as 0', async () => {
    const wrapper = scale({ modelValue: '2+' })
    await wrapper.findAll('input')[3]!.trigger('keydown', { key: 'Backspace' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([null])
  })

  it('leaves keys held with Ctrl to the sheet', async () => {
    const wrapper = scale()
    await wrapper.get('input').trigger('keydown', { key: '3', ctrlKey: true })
    expect(wrapper.emitted('update:modelValue')).toBeUndefined()
  })

  it('says which grade would raise something', () => {
    const wrapper = scale({ raises: { '4+': 'now' } })
    const spoken = wrapper.findAll('label').map(label => label.findAll('.sr-only').map(words => words.text()).join(' '))
    expect(spoken).toEqual(['', '', '', '', '', 'would raise Now'])
  })

  it('ties what is wrong to the group', () => {
    const wrapper = scale({ error: 'Choose a grade.' })
    const group = wrapper.get('[role=radiogroup]')
    expect(document.getElementById(group.attributes('aria-describedby')!)!.textContent).toBe('Choose a grade.')
  })
})
