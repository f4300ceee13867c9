import { onBeforeUnmount } from 'vue'
import { useKeys, type KeyActions } from './useKeys'

/** How long `G` waits for its letter, in milliseconds. */
const patienceMs = 1500

/** `G`, then a link's letter, opens that part. `jump` is given the letter and answers whether it knew it. */
export function useJumpKeys(jump: (letter: string) => boolean) {
  let armedUntil = 0
  const letters = 'abcdefghijklmnopqrstuvwxyz'.split('')
  const actions: KeyActions = Object.fromEntries(letters.map(letter => [letter, (event: KeyboardEvent) => {
    if (event.timeStamp < armedUntil) {
      armedUntil = 0
      if (!jump(letter)) return false
      // A screen may use the same letter for itself; after G it belongs to the band.
      event.stopImmediatePropagation()
      return true
    }
    if (letter === 'g') armedUntil = event.timeStamp + patienceMs
    return false
  }]))
  useKeys(actions, { beforeOthers: true })
  onBeforeUnmount(() => { armedUntil = 0 })
}
