import { and, eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import { pathwayEvents, pathways, patients, referrals, sites } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { pathwaysInScope } from '#server/services/pathway/pathway-scope'
import { unscopedFindAlike } from '#server/services/patient/find-alike'
import { telephoneFrom } from '#server/services/patient/telephone'
import type { AddPatientBody } from '#shared/contracts/patient'
import { DomainError } from '#shared/domain/errors'
import { eyeLabel } from '#shared/domain/pathway/vocabulary'
import { identifierFrom, identifierProblem } from '#shared/domain/patient/identifier'
import { referralSettingsOf } from '#shared/domain/referral/site-settings'

type NewPatient = NonNullable<AddPatientBody['patient']>

/** The identifier as it is compared, refused where the site checks it and its digits do not fit. */
function knownIdentifier(given: NewPatient, site: typeof sites.$inferSelect): NewPatient {
  const identifier = identifierFrom(given.identifier)
  const problem = identifierProblem(identifier, referralSettingsOf(site.settings).identifierCheck, 'patient.identifier')
  if (problem) throw new DomainError('patient.invalid', problem.message, { fields: [problem] })
  return { ...given, identifier }
}

/** Two people who add the same patient at once are let in one after the other, so that the second sees the first. */
export const addLock = 7_401_001

/**
 * A new patient with one pathway for each referred eye, or new pathways for a patient who is here. People alike are shown before
 * anything is created; only a caller who has looked at them adds another person, and never with somebody's identifier.
 */
export async function addPatient(ctx: ServiceContext, input: AddPatientBody) {
  if (!may(ctx.actor, 'addReferral', input.siteId)) throw new DomainError('patient.not-allowed', 'You may not add patients at this site.')
  try {
    const added = await ctx.db.transaction(async (tx) => {
      const [site] = await tx.select().from(sites).where(eq(sites.id, input.siteId))
      if (!site) throw new DomainError('patient.site-not-found', 'There is no such site.')
      const patientId = input.patient ? await insertPatient(tx, ctx, input, knownIdentifier(input.patient, site)) : await knownPatient(tx, ctx, input.patientId ?? '')
      const pathwayIds: string[] = []
      for (const eye of input.eyes) pathwayIds.push(await insertPathway(tx, ctx, input, patientId, eye))
      return { patientId, pathwayIds }
    })
    await notifyLive(ctx.db, 'pathway', input.siteId, added.pathwayIds)
    return added
  }
  catch (error) {
    if (refusedConstraint(error) === 'pathways_one_open_per_eye') throw new DomainError('pathway.already-open', 'This eye already has an open pathway. Go on with that one.')
    throw error
  }
}

async function insertPatient(tx: Transaction, ctx: ServiceContext, input: AddPatientBody, given: NewPatient): Promise<string> {
  if (given.birthDate > ctx.now.toISOString().slice(0, 10)) throw new DomainError('patient.invalid', 'The birth date lies in the future.', { fields: [{ field: 'patient.birthDate', code: 'out-of-range', message: 'Enter a birth date that has passed.' }] })
  await tx.execute(sql`select pg_advisory_xact_lock(${addLock})`)
  const candidates = await unscopedFindAlike(tx, ctx.actor, given)
  if (candidates.length && (!input.confirmedNew || candidates.some(each => each.sameIdentifier))) {
    throw new DomainError('patient.duplicate', candidates.some(each => each.sameIdentifier) ? 'Somebody with this identifier is already here.' : 'Somebody of this name and birth date is already here. Look before you add another.', { detail: { candidates } })
  }
  const [last] = await tx.select({ n: sql<number>`coalesce(max(substring(${patients.recordNumber} from '^FE([0-9]{1,9})$')::int), 20000)` }).from(patients)
  const phone = telephoneFrom(given.phone, 'patient.phone')
  const [patient] = await tx.insert(patients).values({ ...given, phone, recordNumber: `FE${(last?.n ?? 20_000) + 1}`, siteId: input.siteId, numberConfirmedAt: phone ? ctx.now : null, createdAt: ctx.now }).returning({ id: patients.id })
  if (!patient) throw new DomainError('patient.conflict', 'The patient could not be added.')
  await appendAudit(tx, { at: ctx.now, event: 'patient.added', personId: ctx.actor.personId, subjectKind: 'patient', subjectId: patient.id, siteId: input.siteId, payload: { confirmedNew: candidates.length > 0 } })
  return patient.id
}

async function knownPatient(tx: Transaction, ctx: ServiceContext, patientId: string): Promise<string> {
  const [row] = await tx.select({ id: patients.id, diedOn: patients.diedOn }).from(patients).innerJoin(pathways, eq(pathways.patientId, patients.id))
    .where(and(eq(patients.id, patientId), pathwaysInScope(ctx.actor))).limit(1)
  if (!row) throw new DomainError('patient.not-found', 'There is no such patient.')
  if (row.diedOn) throw new DomainError('patient.conflict', 'This patient has died.')
  return row.id
}

async function insertPathway(tx: Transaction, ctx: ServiceContext, input: AddPatientBody, patientId: string, eye: 'right' | 'left'): Promise<string> {
  const [pathway] = await tx.insert(pathways).values({ patientId, eye, siteId: input.siteId, priority: input.priority, referredAt: ctx.now, stageSince: ctx.now }).returning({ id: pathways.id })
  if (!pathway) throw new DomainError('pathway.conflict', 'The pathway could not be opened.')
  await tx.insert(referrals).values({ pathwayId: pathway.id, ...input.referral, source: 'form' })
  await tx.insert(pathwayEvents).values({ pathwayId: pathway.id, at: ctx.now, kind: 'opened', toStage: 'referral', personId: ctx.actor.personId, words: `Referral received, ${eyeLabel(eye).toLowerCase()}` })
  await appendAudit(tx, { at: ctx.now, event: 'pathway.opened', personId: ctx.actor.personId, subjectKind: 'pathway', subjectId: pathway.id, siteId: input.siteId })
  return pathway.id
}
