import { defineStore } from 'pinia'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'

interface UnsentDraft { findings: ReviewFindings, rowVersion: number | null, typedAt: string }

/**
 * What was typed and the server has not yet confirmed, by visit. It lives in this browser only until then: no name, no
 * eye, no record number is kept with it, and a confirmed draft is dropped at once.
 */
export const useReviewDraftStore = defineStore('review-draft', {
  state: () => ({ unsent: {} as Record<string, UnsentDraft> }),
  actions: {
    keep(visitId: string, draft: UnsentDraft) {
      this.unsent[visitId] = draft
    },
    drop(visitId: string) {
      const { [visitId]: _dropped, ...rest } = this.unsent
      this.unsent = rest
    },
  },
  persist: { storage: piniaPluginPersistedstate.localStorage(), pick: ['unsent'] },
})
