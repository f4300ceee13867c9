import type { Urgency } from '#shared/domain/pathway/vocabulary'

/** `reached` happened, `planned` has a date or is expected, `here` is under way, `late` should have happened and did not. */
export type KnotKind = 'reached' | 'planned' | 'here' | 'late'

export const urgencyWords: Record<Urgency, string> = { 'now': 'Now', 'today': 'Today', 'this-week': 'This week' }
/** The colour token of an urgency. The shape and the letter say the same without it. */
export const urgencyTokens: Record<Urgency, 'now' | 'today' | 'week'> = { 'now': 'now', 'today': 'today', 'this-week': 'week' }

/** Whole class names, because Tailwind keeps only those it can read in the source. */
export const urgencyText: Record<Urgency, string> = { 'now': 'text-now', 'today': 'text-today', 'this-week': 'text-week' }
export const urgencyMark: Record<Urgency, string> = { 'now': 'mk-now', 'today': 'mk-today', 'this-week': 'mk-week' }
