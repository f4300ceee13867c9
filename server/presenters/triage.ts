import { may, pathwayActs } from '#server/policies/pathway'
import { sitesWithRole } from '#server/policies/scope'
import { presentReferral } from '#server/presenters/referral'
import type { AlikeOf } from '#server/services/referral/find-alike-of'
import type { TriageList } from '#server/services/referral/list-triage'
import type { Actor } from '#shared/domain/people/vocabulary'

export function presentTriage({ counts, sites, rows }: TriageList, pageSize: number, actor: Actor, now: Date) {
  const last = rows.length === pageSize ? rows.at(-1) : undefined
  const importSites = sitesWithRole(actor, ...pathwayActs.importReferrals)
  return {
    now: now.toISOString(),
    counts: { all: counts.all, incomplete: counts.incomplete, couldPass: counts.couldPass, passed: counts.passed },
    sites: sites.map(site => ({ id: site.id, name: site.name, waitTargetWeeks: site.waitTargetWeeks, weeksToSurgery: site.weeksToSurgery, measured: site.measured })),
    next: last ? `${last.mark}_${last.pathway.id}` : null,
    items: rows.map(row => presentWaiting(row, actor)),
    abilities: { canImport: importSites.length > 0 },
  }
}
export type TriagePage = ReturnType<typeof presentTriage>
export type TriageItem = TriagePage['items'][number]

function presentWaiting({ pathway, patient, referral, clock, ...row }: TriageList['rows'][number], actor: Actor) {
  return {
    id: pathway.id, eye: pathway.eye, state: pathway.state, priority: pathway.priority, siteId: pathway.siteId, siteName: row.siteName, sitePhone: row.sitePhone, zone: row.zone, referredAt: pathway.referredAt.toISOString(),
    patient: { id: patient.id, name: patient.name, birthDate: patient.birthDate, recordNumber: patient.recordNumber, phone: patient.phone, alerts: patient.alerts.map(({ kind, words }) => ({ kind, words })) },
    referral: presentReferral(referral),
    missing: row.missing,
    wait: { days: clock.waitedDays, targetWeeks: row.targetWeeks, targetAt: clock.targetAt.toISOString(), expectedAt: clock.expectedAt.toISOString(), standing: clock.standing },
    fellow: row.fellow?.pathwayId && row.fellow.rowVersion ? { pathwayId: row.fellow.pathwayId, rowVersion: row.fellow.rowVersion } : null,
    attachmentCount: row.attachmentCount,
    abilities: { canTriage: may(actor, 'triage', pathway.siteId) && pathway.state === 'open', canMerge: may(actor, 'mergePatients', pathway.siteId) },
  }
}

export function presentAlike({ patient, alike }: AlikeOf) {
  return {
    patient: { id: patient.id, rowVersion: patient.rowVersion },
    alike: alike.map(each => ({ id: each.patient.id, name: each.patient.name, recordNumber: each.patient.recordNumber, rowVersion: each.patient.rowVersion, why: each.why, eyes: each.eyes.map(({ eye, operatedAt }) => ({ eye, operatedAt: operatedAt?.toISOString() ?? null })) })),
  }
}
export type AlikeView = ReturnType<typeof presentAlike>
