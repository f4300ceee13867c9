/** What a referral must be asked before an eye waits in a queue: each may need somebody to look today, not in weeks. 'common practice'. */
export const redFlagIds = ['suddenLoss', 'painOrRedness', 'flashesOrFloaters'] as const
export type RedFlagId = typeof redFlagIds[number]

export const redFlagQuestions: Readonly<Record<RedFlagId, string>> = {
  suddenLoss: 'Sudden loss of sight?',
  painOrRedness: 'Pain, or a red eye?',
  flashesOrFloaters: 'New flashes or floaters, or a curtain?',
}

/** A question that nobody answered is not a "no". */
export function redFlagsAnswered(flags: Readonly<Record<string, boolean>>): boolean {
  return redFlagIds.every(id => typeof flags[id] === 'boolean')
}

/** The flags that were answered "yes", in the order of the questions. */
export function redFlagsPresent(flags: Readonly<Record<string, boolean>>): RedFlagId[] {
  return redFlagIds.filter(id => flags[id] === true)
}
