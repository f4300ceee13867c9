// @vitest-environment happy-dom
import { mount } from '@vue/test-utils'
import { afterEach, describe, expect, it } from 'vitest'
import ReviewClockDial from '../../../../app/components/review/ReviewClockDial.vue'

function dial(props: { eye: 'right' | 'left', modelValue?: number | null, leaking?: boolean }) {
  const wrapper = mount(ReviewClockDial, {
    attachTo: document.body,
    props: { ...props, 'onUpdate:modelValue': (value: number | null) => wrapper.setProps({ modelValue: value }) },
  })
  return wrapper
}
afterEach(() => { document.body.innerHTML = '' })

describe('the clock dial', () => {
  it('writes temporal at the left of a right eye and nasal at the left of a left eye, as one faces the patient', () => {
    expect(dial({ eye: 'right' }).findAll('span').map(word => word.text())).toEqual(['temporal', 'nasal'])
    expect(dial({ eye: 'left' }).findAll('span').map(word => word.text())).toEqual(['nasal', 'temporal'])
  })

  it('names the eye in words', () => {
    expect(dial({ eye: 'left' }).get('[role=radiogroup]').attributes('aria-label')).toContain('Left eye')
  })

  it.each([['1', 1], ['9', 9], ['0', 10], ['-', 11], ['=', 12]])('takes %s for %i o’clock', async (key, hour) => {
    const wrapper = dial({ eye: 'right' })
    await wrapper.get('[data-hour="12"]').trigger('keydown', { key })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([hour])
    expect((document.activeElement as unknown as SVGElement).dataset.hour).toBe(String(hour))
  })

  it('steps clockwise from twelve to one and back', async () => {
    const wrapper = dial({ eye: 'right', modelValue: 12 })
    await wrapper.get('[data-hour="12"]').trigger('keydown', { key: 'ArrowRight' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([1])
    await wrapper.get('[data-hour="1"]').trigger('keydown', { key: 'ArrowLeft' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([12])
    await wrapper.get('[data-hour="12"]').trigger('keydown', { key: 'ArrowUp' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([11])
  })

  it('has one stop in the tab order', () => {
    const wrapper = dial({ eye: 'right', modelValue: 4 })
    expect(wrapper.findAll('[tabindex="0"]').map(hour => hour.attributes('data-hour'))).toEqual(['4'])
  })

  it('clears with Backspace', async () => {
    const wrapper = dial({ eye: 'right', modelValue: 4 })
    await wrapper.get('[data-hour="4"]').trigger('keydown', { key: 'Backspace' })
    expect(wrapper.emitted('update:modelValue')!.at(-1)).toEqual([null])
  })

  it('draws drops only for a leak', () => {
    const paths = (leaking: boolean) => dial({ eye: 'right', modelValue: 10, leaking }).findAll('path').length
    expect(paths(true)).toBe(paths(false) + 1)
  })
})
