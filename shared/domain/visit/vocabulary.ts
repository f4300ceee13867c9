export const visitStates = ['booked', 'arrived', 'with-optometrist', 'done', 'missing', 'cancelled', 'moved'] as const
export type VisitState = typeof visitStates[number]
/** A visit in one of these holds its place; a cancelled or moved one has given it back. */
export const liveVisitStates = ['booked', 'arrived', 'with-optometrist', 'done', 'missing'] as const

export const sessionKinds = ['day-one', 'follow-up'] as const
export type SessionKind = typeof sessionKinds[number]
