import { defineStore } from 'pinia'
import { ref } from 'vue'

/** Shared with public/theme.js, which applies it before the first paint. */
export const roomStorageKey = 'dawnward.room'

/**
 * The lamp-room theme belongs to the workstation, not to the person: the same room is lit and unlit twenty
 * times a morning, by whoever sits there. It never follows the system's own setting.
 */
export const useThemeStore = defineStore('theme', () => {
  const dim = ref(false)

  function apply() {
    const root = document.documentElement
    if (dim.value) root.setAttribute('data-theme', 'dim')
    else root.removeAttribute('data-theme')
  }

  /** Reads what the page already wears. Call once in the browser, after hydration. */
  function recall() {
    dim.value = document.documentElement.getAttribute('data-theme') === 'dim'
  }

  function set(lightsOff: boolean) {
    dim.value = lightsOff
    apply()
    try {
      localStorage.setItem(roomStorageKey, lightsOff ? 'dim' : 'lit')
    }
    catch {
      // A workstation that keeps nothing still dims for as long as the page stays open.
    }
  }

  function toggle() {
    set(!dim.value)
  }

  return { dim, recall, set, toggle }
})
