import { defineStore } from 'pinia'
import { ref } from 'vue'

/**
 * Whether single-letter keys act on this page. People who steer by voice, or whose hands shake, can switch them off;
 * the choice is the person's, is kept with their settings, and is set here by the staff layout.
 */
export const useKeysStore = defineStore('keys', () => {
  const enabled = ref(true)
  return { enabled }
})
