// @vitest-environment happy-dom
import { readFileSync } from 'node:fs'
import { createPinia, setActivePinia } from 'pinia'
import { beforeEach, describe, expect, it } from 'vitest'
import { roomStorageKey, useThemeStore } from '../../../../app/stores/theme'

const root = document.documentElement
/** The script as the browser gets it, run by itself. */
const beforePaint = () => new Function(readFileSync('public/theme.js', 'utf8'))()

beforeEach(() => {
  setActivePinia(createPinia())
  localStorage.clear()
  root.removeAttribute('data-theme')
})

describe('the lamp-room theme', () => {
  it('is light on a workstation that was never dimmed', () => {
    beforePaint()
    expect(root.hasAttribute('data-theme')).toBe(false)
  })

  it('is remembered by the workstation and worn before the first paint', () => {
    useThemeStore().toggle()
    expect(localStorage.getItem(roomStorageKey)).toBe('dim')
    root.removeAttribute('data-theme')
    beforePaint()
    expect(root.getAttribute('data-theme')).toBe('dim')
    setActivePinia(createPinia())
    const store = useThemeStore()
    store.recall()
    expect(store.dim).toBe(true)
  })

  it('goes back to light', () => {
    const store = useThemeStore()
    store.set(true)
    store.toggle()
    expect(root.hasAttribute('data-theme')).toBe(false)
    expect(localStorage.getItem(roomStorageKey)).toBe('lit')
  })
})
