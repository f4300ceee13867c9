import { defineStore } from 'pinia'
import { ref } from 'vue'

const storageKey = 'dawnward.single-keys'

/** Whether single-letter keys act. People who steer by voice, or whose hands shake, can switch them off. */
export const useKeysStore = defineStore('keys', () => {
  const enabled = ref(true)

  function recall() {
    try {
      enabled.value = localStorage.getItem(storageKey) !== 'off'
    }
    catch {
      enabled.value = true
    }
  }

  function set(on: boolean) {
    enabled.value = on
    try {
      localStorage.setItem(storageKey, on ? 'on' : 'off')
    }
    catch {
      // Without storage the choice holds until the page is closed.
    }
  }

  return { enabled, recall, set }
})
