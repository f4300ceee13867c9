// @vitest-environment happy-dom
import { mount } from '@vue/test-utils'
import { describe, expect, it } from 'vitest'
import UiButton from '../../../../app/components/ui/UiButton.vue'

describe('a button', () => {
  it('says what it is doing while busy, and does nothing twice', async () => {
    const wrapper = mount(UiButton, { global: { stubs: { NuxtLink: true } }, props: { busy: true, busyLabel: 'Signing…' }, slots: { default: 'Sign' } })
    await wrapper.get('button').trigger('click')
    expect(wrapper.text()).toBe('Signing…')
    expect(wrapper.emitted('click')).toBeUndefined()
  })

  it('keeps its place in the tab order when it cannot be used, and is read with its reason', async () => {
    const wrapper = mount(UiButton, { global: { stubs: { NuxtLink: true } }, props: { reason: 'Two findings are missing.' }, slots: { default: 'Sign' }, attachTo: document.body })
    const button = wrapper.get('button')
    await button.trigger('click')
    expect(wrapper.emitted('click')).toBeUndefined()
    expect(button.attributes('disabled')).toBeUndefined()
    expect(button.attributes('aria-disabled')).toBe('true')
    expect(document.getElementById(button.attributes('aria-describedby')!)!.textContent).toBe('Two findings are missing.')
    wrapper.unmount()
  })

  it('stops the form it would have sent', async () => {
    const form = mount({ components: { UiButton }, template: '<form @submit.prevent="$emit(\'sent\')"><UiButton type="submit" reason="Not yet.">Send</UiButton></form>', emits: ['sent'] }, { global: { stubs: { NuxtLink: true } }, attachTo: document.body })
    form.get('button').element.click()
    expect(form.emitted('sent')).toBeUndefined()
    form.unmount()
  })

  it('acts once when it can', async () => {
    const wrapper = mount(UiButton, { global: { stubs: { NuxtLink: true } }, slots: { default: 'Ring now' } })
    await wrapper.get('button').trigger('click')
    expect(wrapper.emitted('click')).toHaveLength(1)
  })
})
