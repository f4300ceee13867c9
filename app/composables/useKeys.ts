import { onBeforeUnmount, onMounted } from 'vue'
import { useKeysStore } from '../stores/keys'
import { keystroke, takesText } from '../utils/keystroke'

/** Answer `false` to leave the key to the browser. */
export type KeyActions = Record<string, (event: KeyboardEvent) => unknown>

/**
 * Keys of one screen, for as long as it is mounted. Names are as in `keystroke`: `j`, `ArrowDown`, `Ctrl+Enter`.
 * Single characters are silent while a text field has focus and when the person has switched them off;
 * keys held with Ctrl always act, because nobody types them by accident. `beforeOthers` lets the band hear a key
 * before the screen does.
 */
export function useKeys(actions: KeyActions, options: { beforeOthers?: boolean } = {}) {
  const keys = useKeysStore()

  function onKeydown(event: KeyboardEvent) {
    if (event.defaultPrevented || event.isComposing) return
    const name = keystroke(event)
    const action = actions[name]
    if (!action) return
    const heldWithCtrl = name.startsWith('Ctrl+')
    if (!heldWithCtrl && takesText(event.target)) return
    if (name.length === 1 && !keys.enabled) return
    if (!heldWithCtrl && dialogIsOpen()) return
    if (action(event) !== false) event.preventDefault()
  }

  onMounted(() => window.addEventListener('keydown', onKeydown, options.beforeOthers))
  onBeforeUnmount(() => window.removeEventListener('keydown', onKeydown, options.beforeOthers))
}

/** A dialog owns the keyboard: a key meant for it must not act on the sheet underneath. */
function dialogIsOpen(): boolean {
  return document.querySelector('[role="dialog"][data-state="open"], [role="alertdialog"][data-state="open"]') !== null
}
