// @vitest-environment happy-dom
import { mount } from '@vue/test-utils'
import { createPinia, setActivePinia } from 'pinia'
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import { defineComponent, h } from 'vue'
import { useJumpKeys } from '../../../../app/composables/useJumpKeys'
import { useKeys } from '../../../../app/composables/useKeys'
import { useKeysStore } from '../../../../app/stores/keys'

function screen(setup: () => void) {
  return mount(defineComponent({ setup() { setup(); return () => h('div', [h('input', { id: 'text' }), h('input', { id: 'radio', type: 'radio' }), h('button')]) } }), { attachTo: document.body })
}
function press(key: string, on: string = 'button', held: Partial<KeyboardEventInit> = {}) {
  document.querySelector(on)!.dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true, ...held }))
}
beforeEach(() => setActivePinia(createPinia()))
afterEach(() => { document.body.innerHTML = '' })

describe('single-letter keys', () => {
  it('act on the screen and on a radio, and are silent in a text field', () => {
    const act = vi.fn()
    const wrapper = screen(() => useKeys({ c: act }))
    press('c')
    press('c', '#radio')
    press('c', '#text')
    expect(act).toHaveBeenCalledTimes(2)
    wrapper.unmount()
  })

  it('are silent once switched off, while keys held with Ctrl still act', () => {
    const letter = vi.fn()
    const held = vi.fn()
    const wrapper = screen(() => useKeys({ 'c': letter, 'Ctrl+Enter': held }))
    useKeysStore().enabled = false
    press('c')
    press('Enter', '#text', { ctrlKey: true })
    expect(letter).not.toHaveBeenCalled()
    expect(held).toHaveBeenCalledOnce()
    wrapper.unmount()
  })

  it('stop with the screen', () => {
    const act = vi.fn()
    screen(() => useKeys({ c: act })).unmount()
    document.body.innerHTML = '<button></button>'
    press('c')
    expect(act).not.toHaveBeenCalled()
  })

  it('leave the keyboard to an open dialog', () => {
    const act = vi.fn()
    const wrapper = screen(() => useKeys({ c: act }))
    document.body.insertAdjacentHTML('beforeend', '<div role="dialog" data-state="open"></div>')
    press('c')
    expect(act).not.toHaveBeenCalled()
    wrapper.unmount()
  })
})

describe('G and a letter', () => {
  it('jump before the screen hears the letter', () => {
    const jump = vi.fn(() => true)
    const own = vi.fn()
    const wrapper = screen(() => { useKeys({ t: own }); useJumpKeys(jump) })
    press('t')
    expect(own).toHaveBeenCalledOnce()
    press('g')
    press('t')
    expect(jump).toHaveBeenCalledWith('t')
    expect(own).toHaveBeenCalledOnce()
    wrapper.unmount()
  })

  it('do nothing without the G', () => {
    const jump = vi.fn(() => true)
    const wrapper = screen(() => useJumpKeys(jump))
    press('t')
    expect(jump).not.toHaveBeenCalled()
    wrapper.unmount()
  })
})
