/** What was pressed, as pages name it: `g`, `Ctrl+Enter`, `ArrowDown`, `[`. */
export function keystroke(event: KeyboardEvent): string {
  const key = event.key.length === 1 ? event.key.toLowerCase() : event.key
  return `${event.ctrlKey || event.metaKey ? 'Ctrl+' : ''}${event.altKey ? 'Alt+' : ''}${key}`
}

const typedInto = new Set(['text', 'search', 'email', 'password', 'tel', 'url', 'number', 'date', 'time', 'datetime-local', 'month', 'week'])

/** Letters belong to the text while one of these has focus. A radio or a checkbox takes no text, so keys still act there. */
export function takesText(target: EventTarget | null): boolean {
  if (!target || !('tagName' in target)) return false
  const element = target as HTMLElement
  if (element.isContentEditable || element.tagName === 'TEXTAREA' || element.tagName === 'SELECT') return true
  return element.tagName === 'INPUT' && typedInto.has((element as HTMLInputElement).type)
}
