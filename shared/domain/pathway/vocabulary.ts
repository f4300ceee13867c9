/** The words of a pathway. One list each; the database checks, the contracts and the screens all read these. */

export const eyes = ['right', 'left'] as const
/** Laterality is a type, never a boolean or a free string. */
export type Eye = typeof eyes[number]

export const stages = ['referral', 'biometry', 'surgery', 'day-one', 'follow-up', 'discharge'] as const
export type Stage = typeof stages[number]

export const pathwayStates = ['open', 'held', 'closed'] as const
/** `open` moves, `held` waits with a reason and a date to look again, `closed` left early. */
export type PathwayState = typeof pathwayStates[number]

export const closeReasons = ['declined', 'not-suitable', 'moved-away', 'died', 'entered-in-error'] as const
export type CloseReason = typeof closeReasons[number]

export const urgencies = ['now', 'today', 'this-week'] as const
/** Most urgent first. */
export type Urgency = typeof urgencies[number]

/** "Right eye" or "Left eye": the only way an eye is named to a clinician. */
export function eyeLabel(eye: Eye): string {
  return eye === 'right' ? 'Right eye' : 'Left eye'
}

export function otherEye(eye: Eye): Eye {
  return eye === 'right' ? 'left' : 'right'
}
