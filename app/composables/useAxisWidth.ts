import { onBeforeUnmount, onMounted, ref } from 'vue'
import type { DaysAxisWidth } from '../utils/axis'

/** Which days axis fits the window. The server draws the wide one; a telephone redraws once it is known. */
export function useAxisWidth() {
  const axis = ref<DaysAxisWidth>('wide')
  const queries: MediaQueryList[] = []

  function measure() {
    axis.value = queries[0]?.matches ? 'narrow' : queries[1]?.matches ? 'middle' : 'wide'
  }
  onMounted(() => {
    queries.push(window.matchMedia('(max-width: 719px)'), window.matchMedia('(max-width: 1099px)'))
    queries.forEach(query => query.addEventListener('change', measure))
    measure()
  })
  onBeforeUnmount(() => queries.forEach(query => query.removeEventListener('change', measure)))
  return axis
}
