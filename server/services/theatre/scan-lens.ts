import { desc, eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { lensLabels, lensPlans, lensScans, safetyStops } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { recordEvent } from '#server/services/pathway/record-event'
import { lockCase } from '#server/services/theatre/load-case'
import type { LensScanBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'
import { readLensLabel } from '#shared/domain/theatre/gs1'
import type { LensLabel } from '#shared/domain/theatre/gs1'
import { lensReasons } from '#shared/domain/theatre/lens-check'
import { dayBounds } from '#shared/domain/visit/site-day'

/** Holds a lens up to the plan. One that is not the lens planned, or out of date, stops the case in the record until a surgeon explains it or another lens is held up. */
export async function scanLens(ctx: ServiceContext, input: LensScanBody & { caseId: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const { theatreCase, list, loaded } = await lockCase(tx, ctx, input.caseId, 'checkSafety', 'A nurse or surgeon of this site holds the lens up to the check.')
    const { date: today } = dayBounds(loaded.site.zone, ctx.now)
    const label = input.label.trim() ? readLensLabel(input.label, today) : undefined
    const held = await identify(tx, label, input.typed)
    const [plan] = await tx.select().from(lensPlans).where(eq(lensPlans.pathwayId, theatreCase.pathwayId)).orderBy(desc(lensPlans.version)).limit(1)
    const reasons = lensReasons(held, plan ?? null, today)
    const [scan] = await tx.insert(lensScans).values({
      caseId: theatreCase.id, source: label ? 'scanned' : 'typed', label: label ? input.label.trim() : null, gtin: label?.gtin, lot: label?.lot, serial: label?.serial, expiresOn: held.expiresOn, model: held.model, powerD: held.powerD,
      plannedModel: plan?.model, plannedPowerD: plan?.powerD, reasons, scannedBy: ctx.actor.personId, scannedAt: ctx.now,
    }).returning()
    if (!scan) throw new DomainError('theatre.conflict', 'The lens could not be recorded.')
    if (reasons.length) await tx.insert(safetyStops).values({ caseId: theatreCase.id, step: 'before-incision', scanId: scan.id, reasons, raisedBy: ctx.actor.personId, raisedAt: ctx.now })
    await recordEvent(tx, ctx, loaded, {
      kind: reasons.length ? 'safety-stopped' : 'lens-scanned', words: reasons.length ? `Safety check stopped: ${reasons.map(reason => reason.sentence).join(' ')}` : 'The lens in the room is the lens planned', audit: reasons.length ? 'theatre.safety-stopped' : 'theatre.lens-scanned',
      payload: { caseId: theatreCase.id, scanId: scan.id, codes: reasons.map(reason => reason.code) },
    })
    return { siteId: list.siteId, pathwayId: theatreCase.pathwayId, agrees: !reasons.length }
  })
  await notifyLive(ctx.db, 'pathway', done.siteId, [done.pathwayId])
  return done
}

/** Which lens it is: by the number on its label, or by what two people read from the box. */
async function identify(tx: Transaction, label: LensLabel | undefined, typed: LensScanBody['typed']) {
  if (!label) return typed!
  const [known] = await tx.select().from(lensLabels).where(eq(lensLabels.gtin, label.gtin))
  if (!known && !typed) throw refuse('theatre.label-unknown', 'unknown', 'This item number is not known here. Type model, power and use-before date from the box, two people.')
  if (!label.expiresOn && !typed) throw refuse('theatre.label-invalid', 'required', 'The label holds no use-before date (17). Type what stands on the box.')
  const model = known?.model ?? typed!.model
  const powerD = known?.powerD ?? typed!.powerD
  return { model, powerD, expiresOn: label.expiresOn ?? typed!.expiresOn }
}

const refuse = (code: string, fieldCode: string, message: string) => new DomainError(code, message, { fields: [{ field: 'label', code: fieldCode, message }] })
