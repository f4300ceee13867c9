import { storeToRefs } from 'pinia'
import { onMounted } from 'vue'
import { useThemeStore } from '../stores/theme'
import { useKeys } from './useKeys'

/** The review sheet's switch for a room with the lights off: `D`, or its button. The change is at once, without a fade. */
export function useLampRoom() {
  const theme = useThemeStore()
  const { dim } = storeToRefs(theme)
  onMounted(() => theme.recall())
  useKeys({ d: () => theme.toggle() })
  return { dim, toggle: () => theme.toggle() }
}
