import { eq, sql } from 'drizzle-orm'
import { referralImportRows, referralImports, sites } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { addLock } from '#server/services/patient/add-patient'
import { insertPathways, insertPatients } from '#server/services/referral/commit-import'
import { unscopedFindKnown } from '#server/services/referral/find-known'
import { readBundle } from '#server/services/referral/read-bundle'
import { DomainError } from '#shared/domain/errors'
import { decideFate } from '#shared/domain/referral/decide-fate'
import type { Fate } from '#shared/domain/referral/decide-fate'
import { referralSettingsOf } from '#shared/domain/referral/site-settings'
import { dayBounds } from '#shared/domain/visit/site-day'

/** Takes in the referrals of a FHIR Bundle, all or none. Somebody who may be here already is shown, and nothing is stored. */
export async function takeBundle(ctx: ServiceContext, input: { siteId: string, body: unknown }) {
  if (!may(ctx.actor, 'importReferrals', input.siteId)) throw new DomainError('referral.not-allowed', 'A coordinator or the clinical lead of this site takes in referrals of other systems.')
  const [site] = await ctx.db.select().from(sites).where(eq(sites.id, input.siteId))
  if (!site) throw new DomainError('referral.site-not-found', 'There is no such site.')
  const read = readBundle(input.body, { identifierCheck: referralSettingsOf(site.settings).identifierCheck, today: dayBounds(site.zone, ctx.now).date })
  const done = await ctx.db.transaction(async (tx) => {
    await tx.execute(sql`select pg_advisory_xact_lock(${addLock})`)
    const known = await unscopedFindKnown(tx, ctx.actor, read.map(({ entry, data }) => ({ line: entry, name: data.name, birthDate: data.birthDate, identifier: data.identifier })))
    const decided = read.map(({ entry, data }, index) => ({ entry, data, ...decideFate(data, known.get(entry) ?? [], read.slice(0, index).find(each => each.data.name === data.name && each.data.birthDate === data.birthDate)?.entry) }))
    refuseUnclear(decided)
    const [taken] = await tx.insert(referralImports).values({ siteId: site.id, personId: ctx.actor.personId, fileName: 'FHIR bundle', state: 'committed', rowsDone: read.length, fates: { 'new': decided.filter(each => each.fate === 'new').length, 'new-pathway': decided.filter(each => each.fate === 'new-pathway').length }, startedAt: ctx.now, progressAt: ctx.now, committedAt: ctx.now }).returning({ id: referralImports.id })
    if (!taken) throw new DomainError('referral.conflict', 'The bundle could not be taken in.')
    await tx.insert(referralImportRows).values(decided.map(({ entry, data, fate, patientId }) => ({ importId: taken.id, line: entry, fate, data, patientId })))
    await insertPatients(tx, ctx, { id: taken.id, siteId: site.id })
    const pathwayCount = await insertPathways(tx, ctx, { id: taken.id, siteId: site.id }, 'fhir')
    await tx.update(referralImportRows).set({ data: null }).where(eq(referralImportRows.importId, taken.id))
    await appendAudit(tx, { at: ctx.now, event: 'referral.imported', personId: ctx.actor.personId, subjectKind: 'referral-import', subjectId: taken.id, siteId: site.id, payload: { source: 'fhir', pathways: pathwayCount } })
    return { id: taken.id, patients: decided.filter(each => each.fate === 'new').length, pathwayCount }
  })
  await notifyLive(ctx.db, 'pathway', site.id, [])
  return done
}

function refuseUnclear(decided: readonly (Fate & { entry: number })[]): void {
  const unclear = decided.flatMap(({ entry, problems }) => problems.map(each => ({ ...each, field: `Bundle.entry[${entry}].resource.${each.field === 'eye' ? 'bodySite' : 'subject'}` })))
  if (!unclear.length) return
  throw new DomainError('patient.duplicate', 'Somebody in this bundle may be here already. Look first; nothing was stored.', { fields: unclear, detail: { issue: unclear.map(each => ({ severity: 'error', code: 'duplicate', diagnostics: each.message, expression: [each.field] })) } })
}
