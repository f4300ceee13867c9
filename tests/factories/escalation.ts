import type { ReviewContext, ReviewFindings } from '#shared/domain/review/vocabulary'

/** A day-one eye of which everything was recorded and nothing is wrong. */
export const quietFindings: ReviewFindings = {
  painScore: 0, painGrowing: false, vomiting: false, acuityUnaided: { logMar: 0.2, entered: '6/9' }, acuityPinhole: { logMar: 0.1, entered: '6/7.5' }, iopMmHg: 15, iopMethod: 'applanation',
  oedemaGrade: 0, oedemaLimbusToLimbus: false, infiltrate: false, epithelialDefectMm: 0, wound: 'sealed', seidel: 'negative', irisInWound: false, chamberDepth: 'deep', cells: '0.5+', flare: '1+', fibrin: false, hypopyonMm: 0, hyphaema: 'none',
  vitreousInChamber: false, vitreousCells: false, pupil: 'round', lensPosition: 'centred', lensTouchesCornea: false, lensFragment: 'none', redReflex: 'normal', lidSwelling: false, flashesOrFloaters: false, curtainOrFieldLoss: false, dropsUse: 'using', dropsAllergy: false,
}

export const dayOneContext: ReviewContext = {
  visitKind: 'day-one', daysAfterSurgery: 1, riskReasons: [], preoperative: { bestLogMar: 0.5, iopMmHg: 15, redReflex: 'normal' }, onSteroidDrops: true, lensAsPlanned: true, otherSuspectedOnList: 0, otherSuspectedAtSiteThisWeek: 0,
}

export const sees = (logMar: number) => ({ acuityUnaided: { logMar, entered: `${logMar} logMAR` }, acuityPinhole: undefined })
