import { useDebounceFn } from '@vueuse/core'
import type { ReviewSheet } from '#server/presenters/review'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'

/**
 * The findings as they are typed. Every change is kept in this browser at once and flushed to the server soon after; a lost
 * network or an expired session only delays the flush. A conflict shows the other person's version; nothing is overwritten.
 */
export function useReviewDraft(visitId: Ref<string>, sheet: Ref<ReviewSheet | undefined>) {
  const store = useReviewDraftStore()
  const now = useClock()
  const acts = useReviewActs(visitId)
  const findings = ref<ReviewFindings>({})
  const rowVersion = ref<number | null>(null)
  const savedAt = ref<string>()
  const trouble = ref('')
  const conflict = ref<{ findings: ReviewFindings, rowVersion: number } | null>(null)
  let isLoaded = false

  function load(from: ReviewSheet) {
    const last = from.signed.at(-1)
    findings.value = { ...(from.draft?.findings ?? last?.findings ?? {}) }
    rowVersion.value = from.draft?.rowVersion ?? null
    isLoaded = true
  }
  watch(sheet, (from) => {
    if (from && !isLoaded) load(from)
  }, { immediate: true })
  onMounted(() => {
    const unsent = store.unsent[visitId.value]
    if (!unsent || !sheet.value || sheet.value.signed.length) return
    findings.value = unsent.findings
    rowVersion.value = unsent.rowVersion
    void flush()
  })

  async function flush() {
    if (!sheet.value?.abilities.canSign || conflict.value) return
    const sent = JSON.stringify(findings.value)
    try {
      const saved = await acts.saveDraft.mutateAsync({ findings: findings.value, rowVersion: rowVersion.value })
      rowVersion.value = saved.rowVersion
      savedAt.value = saved.savedAt
      trouble.value = ''
      if (JSON.stringify(findings.value) === sent) store.drop(visitId.value)
      else soon()
    }
    catch (error) {
      if (!(error instanceof ApiProblem)) throw error
      const current = error.problem.current as { findings: ReviewFindings, rowVersion: number } | null | undefined
      if (error.code === 'review.stale' && current) conflict.value = current
      trouble.value = error.status === 401 ? 'Your session has ended. What you typed is kept here: sign in again in another window, then go on.' : error.message
    }
  }
  const soon = useDebounceFn(() => void flush(), 1_500)

  function set<K extends keyof ReviewFindings>(field: K, value: ReviewFindings[K] | null | undefined) {
    const { [field]: _old, ...rest } = findings.value
    findings.value = value === null || value === undefined || value === '' ? rest as ReviewFindings : { ...findings.value, [field]: value }
    store.keep(visitId.value, { findings: findings.value, rowVersion: rowVersion.value, typedAt: now.value })
    void soon()
  }

  /** After a conflict: go on with one of the two; the other stays on screen until then. */
  function settle(which: 'mine' | 'theirs') {
    if (!conflict.value) return
    rowVersion.value = conflict.value.rowVersion
    if (which === 'theirs') findings.value = { ...conflict.value.findings }
    conflict.value = null
    void flush()
  }
  /** Back to the newest signed version, as it stands: an amendment that is left changes nothing. */
  function reset() {
    if (sheet.value) load(sheet.value)
    store.drop(visitId.value)
  }
  return { findings, set, reset, flush, settle, conflict, savedAt, trouble, drop: () => store.drop(visitId.value), isSaving: acts.saveDraft.isPending }
}
