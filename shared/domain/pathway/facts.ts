/**
 * What a service has loaded about one pathway before it asks whether the pathway may move. Plain values only. A fact that was
 * not loaded or not recorded counts as not met: nothing unknown opens a door.
 */
export interface PathwayFacts {
  /** Accepted by a surgeon, or under their written criteria. */
  triageAccepted: boolean
  eyeStated: boolean
  /** A telephone, an e-mail address or a postal address that works. */
  contactRouteRecorded: boolean
  /** The question was asked and answered; a refusal is an answer. */
  messageConsentRecorded: boolean
  redFlagsAnswered: boolean

  biometryAccepted: boolean
  /** Plausibility warnings of the accepted biometry that were neither repeated nor explained by name. */
  plausibilityWarningsOpen: number
  /** Model, power, target and predicted refraction are signed. */
  lensPlanSigned: boolean
  /** The second check agreed, or its difference is explained. */
  secondCheckSettled: boolean
  riskAssessed: boolean
  consentRecorded: boolean
  onTheatreList: boolean

  operationNoteSigned: boolean
  lensAsPlanned: boolean
  lensDeviationExplained: boolean
  dropsPrescribed: boolean
  dayOneBooked: boolean
  /** A recorded decision for another kind of first check than a day-one visit. */
  otherFirstCheckDecided: boolean

  dayOneReviewSigned: boolean
  /** The result of that other kind of first check is recorded. */
  otherFirstCheckRecorded: boolean
  /** Open escalations of urgency `now` or `today` that nobody has acknowledged. */
  unacknowledgedUrgentEscalations: number
  nextVisitBooked: boolean

  finalRefractionRecorded: boolean
  finalAcuityRecorded: boolean
  /** Open or acknowledged escalations that are not closed. */
  openEscalations: number
  fellowEyeDecisionRecorded: boolean
  dischargeLetterSent: boolean

  /** Another pathway of the same eye that is neither closed nor discharged. */
  otherOpenPathwayOfEye: boolean
}

/** What a caller may know: any part of it. */
export type KnownFacts = Partial<PathwayFacts>
