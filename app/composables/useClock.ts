/** The present as the page knows it, once a half minute; the server's own time corrects it where an answer brings one. */
export function useClock() {
  const now = useState('clock', () => new Date().toISOString())
  let timer: ReturnType<typeof setInterval> | undefined
  onMounted(() => {
    const tick = () => {
      now.value = new Date().toISOString()
    }
    tick()
    timer = setInterval(tick, 30_000)
  })
  onBeforeUnmount(() => clearInterval(timer))
  return now
}
