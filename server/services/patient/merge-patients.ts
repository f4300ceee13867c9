import { and, eq, inArray, isNull, ne, sql } from 'drizzle-orm'
import type { PgColumn, PgTable } from 'drizzle-orm/pg-core'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import { attachments, inboundTexts, messages, pathwayEvents, pathways, patientLinks, patientMerges, patients } from '#server/db/schema/index'
import type { MergeBefore } from '#server/db/schema/referral'
import { may } from '#server/policies/pathway'
import { maySeePathway } from '#server/policies/scope'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { addLock } from '#server/services/patient/add-patient'
import type { MergeBody, UnmergeBody } from '#shared/contracts/patient'
import { DomainError } from '#shared/domain/errors'
import { eyeLabel } from '#shared/domain/pathway/vocabulary'

type Patient = typeof patients.$inferSelect
const notFound = () => new DomainError('patient.not-found', 'There is no such patient.')

/** Rows that name a patient beside a pathway's own, whose rows follow the pathway by the key's cascade. `messages` here: those without one. */
const followers: Readonly<Record<string, { table: PgTable, id: PgColumn, patientId: PgColumn, pathwayId?: PgColumn }>> = {
  patientLinks: { table: patientLinks, id: patientLinks.id, patientId: patientLinks.patientId },
  inboundTexts: { table: inboundTexts, id: inboundTexts.id, patientId: inboundTexts.patientId },
  attachments: { table: attachments, id: attachments.id, patientId: attachments.patientId },
  messages: { table: messages, id: messages.id, patientId: messages.patientId, pathwayId: messages.pathwayId },
}
/** What the kept record takes over where it has nothing. Preferences and consents are a person's word and are never taken from another record. */
const fillable = ['identifier', 'phone', 'email', 'address'] as const

/**
 * Makes two records of one person one: signed, and reversible. Every pathway of the merged record moves to the kept one; the merged
 * record stays, empty, and says where it went. Two open pathways of one eye are refused: a person decides which goes on first.
 */
export async function mergePatients(ctx: ServiceContext, input: MergeBody & { keptId: string }) {
  if (input.keptId === input.mergedId) throw new DomainError('patient.invalid', 'These are one record already.', { fields: [{ field: 'mergedId', code: 'same', message: 'Choose another record.' }] })
  try {
    const done = await ctx.db.transaction(async (tx) => {
      const { kept, merged } = await lockBoth(tx, ctx, input.keptId, input.mergedId)
      if (kept.rowVersion !== input.keptRowVersion || merged.rowVersion !== input.mergedRowVersion) throw new DomainError('patient.stale', 'One of these records was changed meanwhile. Look at both again.', { detail: { current: { keptRowVersion: kept.rowVersion, mergedRowVersion: merged.rowVersion } } })
      if (kept.mergedIntoId ?? merged.mergedIntoId) throw new DomainError('patient.conflict', 'One of these records has been merged already.')
      await refuseSameEye(tx, kept.id, merged.id)
      const moved = await moveAll(tx, merged.id, kept.id)
      const filled = Object.fromEntries(fillable.filter(field => !kept[field] && merged[field]).map(field => [field, merged[field]]))
      await tx.update(patients).set({ mergedIntoId: kept.id, identifier: null, rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, merged.id))
      const alerts = [...kept.alerts, ...merged.alerts.filter(alert => !kept.alerts.some(each => each.kind === alert.kind && each.words === alert.words))]
      await tx.update(patients).set({ ...filled, alerts, riskReasons: [...new Set([...kept.riskReasons, ...merged.riskReasons])], rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, kept.id))
      const [row] = await tx.insert(patientMerges).values({ keptId: kept.id, mergedId: merged.id, reason: input.reason, before: { kept, merged, moved, filled }, signedBy: ctx.actor.personId, signedAt: ctx.now }).returning({ id: patientMerges.id })
      if (!row) throw new DomainError('patient.conflict', 'The records could not be merged.')
      await tellPathways(tx, ctx, moved.pathways ?? [], `Record ${merged.recordNumber} merged into ${kept.recordNumber}: ${input.reason}`)
      await appendAudit(tx, { at: ctx.now, event: 'patient.merged', personId: ctx.actor.personId, subjectKind: 'patient', subjectId: kept.id, siteId: kept.siteId, payload: { mergeId: row.id, mergedId: merged.id } })
      return { mergeId: row.id, patientId: kept.id, pathwayIds: moved.pathways ?? [], siteId: kept.siteId }
    })
    await notifyLive(ctx.db, 'pathway', done.siteId, done.pathwayIds)
    return done
  }
  catch (error) {
    if (refusedConstraint(error) === 'pathways_one_open_per_eye') throw new DomainError('patient.conflict', 'Both records have an open pathway of one eye. Close one of them first.')
    throw error
  }
}

/** Takes a merge back: what moved then moves back, what was filled in is taken out where nobody has changed it since. */
export async function unmergePatients(ctx: ServiceContext, input: UnmergeBody & { mergeId: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const [merge] = await tx.select().from(patientMerges).where(eq(patientMerges.id, input.mergeId)).for('update')
    if (!merge) throw new DomainError('patient.not-found', 'There is no such merge.')
    const { kept, merged } = await lockBoth(tx, ctx, merge.keptId, merge.mergedId)
    if (merge.undoneAt) throw new DomainError('patient.conflict', 'This merge has been taken back already.')
    if (merged.mergedIntoId !== kept.id || kept.mergedIntoId) throw new DomainError('patient.conflict', 'Another merge came after this one. Take that one back first.')
    const { before } = merge
    await moveListed(tx, before.moved, kept.id, merged.id)
    const untouched = Object.fromEntries(fillable.filter(field => field in before.filled && kept[field] === before.filled[field]).map(field => [field, before.kept[field] ?? null]))
    const then = before as MergeBefore & { kept: Patient, merged: Patient }
    const came = then.merged.alerts.filter(alert => !then.kept.alerts.some(each => each.kind === alert.kind && each.words === alert.words))
    await tx.update(patients).set({ ...untouched, alerts: kept.alerts.filter(alert => !came.some(each => each.kind === alert.kind && each.words === alert.words)), riskReasons: kept.riskReasons.filter(each => then.kept.riskReasons.includes(each) || !then.merged.riskReasons.includes(each)), rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, kept.id))
    await tx.update(patients).set({ mergedIntoId: null, identifier: then.merged.identifier, rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, merged.id))
    await tx.update(patientMerges).set({ undoneBy: ctx.actor.personId, undoneAt: ctx.now, undoReason: input.reason }).where(eq(patientMerges.id, merge.id))
    await tellPathways(tx, ctx, before.moved.pathways ?? [], `Merge of ${merged.recordNumber} into ${kept.recordNumber} taken back: ${input.reason}`)
    await appendAudit(tx, { at: ctx.now, event: 'patient.unmerged', personId: ctx.actor.personId, subjectKind: 'patient', subjectId: kept.id, siteId: kept.siteId, payload: { mergeId: merge.id, mergedId: merged.id } })
    return { mergeId: merge.id, keptId: kept.id, mergedId: merged.id, pathwayIds: before.moved.pathways ?? [], siteId: kept.siteId }
  })
  await notifyLive(ctx.db, 'pathway', done.siteId, done.pathwayIds)
  return done
}

/** Both records, locked in the order of their ids; for somebody who may do this at every site where either has a pathway, else not found. */
async function lockBoth(tx: Transaction, ctx: ServiceContext, keptId: string, mergedId: string): Promise<{ kept: Patient, merged: Patient }> {
  await tx.execute(sql`select pg_advisory_xact_lock(${addLock})`)
  const both = await tx.select().from(patients).where(inArray(patients.id, [keptId, mergedId])).orderBy(patients.id).for('update')
  const where = await tx.select({ siteId: pathways.siteId, practiceId: pathways.practiceId, patientId: pathways.patientId }).from(pathways).where(inArray(pathways.patientId, [keptId, mergedId]))
  const kept = both.find(each => each.id === keptId)
  const merged = both.find(each => each.id === mergedId)
  if (!kept || !merged || !where.some(each => each.patientId === keptId)) throw notFound()
  if (!merged.mergedIntoId && !where.some(each => each.patientId === mergedId)) throw notFound()
  if (where.some(each => !maySeePathway(ctx.actor, each))) throw notFound()
  if (where.some(each => !may(ctx.actor, 'mergePatients', each.siteId))) throw new DomainError('patient.not-allowed', 'A coordinator or surgeon of every site of these records merges them.')
  return { kept, merged }
}

async function refuseSameEye(tx: Transaction, keptId: string, mergedId: string): Promise<void> {
  const open = await tx.select({ eye: pathways.eye, patientId: pathways.patientId }).from(pathways).where(and(inArray(pathways.patientId, [keptId, mergedId]), ne(pathways.state, 'closed'), ne(pathways.stage, 'discharge')))
  const twice = (['right', 'left'] as const).filter(eye => open.some(each => each.eye === eye && each.patientId === keptId) && open.some(each => each.eye === eye && each.patientId === mergedId))
  if (twice.length) throw new DomainError('patient.conflict', `Both records have an open pathway of the ${twice.join(' and the ')} eye. Close one of them first.`, { detail: { eyes: twice.map(eyeLabel) } })
}

async function moveAll(tx: Transaction, fromId: string, toId: string): Promise<Record<string, string[]>> {
  const moved: Record<string, string[]> = { pathways: (await tx.update(pathways).set({ patientId: toId, rowVersion: sql`${pathways.rowVersion} + 1` }).where(eq(pathways.patientId, fromId)).returning({ id: pathways.id })).map(row => row.id) }
  for (const [name, { table, id, patientId, pathwayId }] of Object.entries(followers)) {
    const rows = await tx.update(table).set({ patientId: toId }).where(and(eq(patientId, fromId), pathwayId ? isNull(pathwayId) : undefined)).returning({ id })
    moved[name] = rows.map(row => String(row.id))
  }
  return moved
}

async function moveListed(tx: Transaction, moved: Record<string, string[]>, fromId: string, toId: string): Promise<void> {
  if (moved.pathways?.length) await tx.update(pathways).set({ patientId: toId, rowVersion: sql`${pathways.rowVersion} + 1` }).where(and(inArray(pathways.id, moved.pathways), eq(pathways.patientId, fromId)))
  for (const [name, { table, id, patientId }] of Object.entries(followers)) {
    const ids = moved[name] ?? []
    if (ids.length) await tx.update(table).set({ patientId: toId }).where(and(inArray(id, ids), eq(patientId, fromId)))
  }
}

async function tellPathways(tx: Transaction, ctx: ServiceContext, ids: readonly string[], words: string): Promise<void> {
  if (ids.length) await tx.insert(pathwayEvents).values(ids.map(pathwayId => ({ pathwayId, at: ctx.now, kind: 'record-merged', personId: ctx.actor.personId, words })))
}
