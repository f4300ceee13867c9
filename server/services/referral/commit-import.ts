import { and, eq, inArray, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { referralImportRows, referralImports } from '#server/db/schema/index'
import { may } from '#server/policies/pathway'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { addLock } from '#server/services/patient/add-patient'
import { importInScope } from '#server/services/referral/list-imports'
import { DomainError } from '#shared/domain/errors'

/**
 * Takes over every good line of a checked file, or none: one transaction of a few statements over the whole file, whatever its length.
 * Lines that wait to be looked at and lines with errors stay behind.
 */
export async function commitImport(ctx: ServiceContext, importId: string) {
  const done = await ctx.db.transaction(async (tx) => {
    const [found] = await tx.select().from(referralImports).where(and(eq(referralImports.id, importId), importInScope(ctx.actor))).for('update')
    if (!found) throw new DomainError('referral.not-found', 'There is no such file.')
    if (!may(ctx.actor, 'importReferrals', found.siteId)) throw new DomainError('referral.not-allowed', 'A coordinator or the clinical lead of this site takes in files of referrals.')
    if (found.state === 'committed') throw new DomainError('referral.conflict', 'This file has been taken over already.')
    if (found.state !== 'checked') throw new DomainError('referral.conflict', 'This file has not been looked at to its end. Send it again.')
    if (!(found.fates.new || found.fates['new-pathway'])) throw new DomainError('referral.invalid', 'No line of this file can be used.')
    await tx.execute(sql`select pg_advisory_xact_lock(${addLock})`)
    await refuseChanged(tx, found.id)
    await insertPatients(tx, ctx, found)
    const pathwayCount = await insertPathways(tx, ctx, found)
    // What was said of people who now have a record is kept there and nowhere else.
    await tx.update(referralImportRows).set({ data: null }).where(and(eq(referralImportRows.importId, found.id), inArray(referralImportRows.fate, ['new', 'new-pathway'])))
    const [committed] = await tx.update(referralImports).set({ state: 'committed', committedAt: ctx.now }).where(eq(referralImports.id, found.id)).returning()
    await appendAudit(tx, { at: ctx.now, event: 'referral.imported', personId: ctx.actor.personId, subjectKind: 'referral-import', subjectId: found.id, siteId: found.siteId, payload: { fates: found.fates, pathways: pathwayCount } })
    return { committed: committed ?? found, pathwayCount }
  })
  await notifyLive(ctx.db, 'pathway', done.committed.siteId, [])
  return done
}

/** Between the look and the commit somebody may have added one of these people, or opened one of these eyes. */
async function refuseChanged(tx: Transaction, importId: string): Promise<void> {
  const { rows } = await tx.execute<{ line: number }>(sql`
    with r as materialized (select line, fate, patient_id, data->>'name' as name, (data->>'birthDate')::date as birth, data->>'identifier' as identifier, data->'eyes' as eyes
      from referral_import_rows where import_id = ${importId} and fate in ('new', 'new-pathway'))
    select line from r where fate = 'new' and exists (select 1 from patients p where p.merged_into_id is null and p.birth_date = r.birth and lower(regexp_replace(p.name, '\\s+', ' ', 'g')) = lower(r.name))
    union select line from r where fate = 'new' and exists (select 1 from patients p where p.identifier = r.identifier)
    union select line from r join patients p on p.id = r.patient_id where fate = 'new-pathway' and (p.merged_into_id is not null or p.died_on is not null
      or exists (select 1 from pathways w where w.patient_id = p.id and w.state <> 'closed' and w.stage <> 'discharge' and r.eyes ? w.eye))
    order by line limit 20`)
  if (rows.length) throw new DomainError('referral.stale', 'Some of these people were added meanwhile. Send the file again to look at it anew; nothing was taken over.', { detail: { lines: rows.map(row => row.line) } })
}

export interface Taken { id: string, siteId: string }

/** A new patient has the id of its line, so that the pathways of the next statement find it. */
export async function insertPatients(tx: Transaction, ctx: ServiceContext, { id, siteId }: Taken): Promise<void> {
  const at = sql`${ctx.now.toISOString()}::timestamptz`
  await tx.execute(sql`
    with added as (
      insert into patients (id, record_number, name, birth_date, identifier, phone, email, address, message_consent, number_confirmed_at, site_id, created_at)
      select r.id, 'FE' || ((select coalesce(max(substring(record_number from '^FE([0-9]{1,9})$')::int), 20000) from patients) + row_number() over (order by r.line)),
        r.data->>'name', (r.data->>'birthDate')::date, r.data->>'identifier', r.data->>'phone', r.data->>'email', r.data->>'address', (r.data->>'messageConsent')::boolean, null, ${siteId}::uuid, ${at}
      from referral_import_rows r where r.import_id = ${id} and r.fate = 'new' returning id)
    insert into audit_rows (at, event, person_id, subject_kind, subject_id, site_id, payload)
    select ${at}, 'patient.added', ${ctx.actor.personId}::uuid, 'patient', id::text, ${siteId}::uuid, jsonb_build_object('importId', ${id}::text) from added`)
}

export async function insertPathways(tx: Transaction, ctx: ServiceContext, { id, siteId }: Taken, source: 'csv' | 'fhir' = 'csv'): Promise<number> {
  const at = sql`${ctx.now.toISOString()}::timestamptz`
  const { rows } = await tx.execute<{ n: number }>(sql`
    with lines as materialized (select coalesce(r.patient_id, r.id) as patient_id, r.data, e.eye from referral_import_rows r, jsonb_array_elements_text(r.data->'eyes') as e(eye)
        where r.import_id = ${id} and r.fate in ('new', 'new-pathway')),
    opened as (
      insert into pathways (patient_id, eye, site_id, priority, referred_at, stage_since)
      select l.patient_id, l.eye, ${siteId}::uuid, l.data->>'priority', least(${at}, coalesce(((l.data->>'referredOn')::date + time '12:00') at time zone s.zone, ${at})), ${at}
      from lines l join sites s on s.id = ${siteId}::uuid returning id, patient_id, eye),
    referred as (
      insert into referrals (pathway_id, referrer, referrer_email, source, reason, vision_right, vision_left, red_flags)
      select o.id, l.data->>'referrer', l.data->>'referrerEmail', ${source}, l.data->>'reason', l.data->>'visionRight', l.data->>'visionLeft', l.data->'redFlags'
      from opened o join lines l on l.patient_id = o.patient_id and l.eye = o.eye),
    told as (
      insert into pathway_events (pathway_id, at, kind, to_stage, person_id, words)
      select id, ${at}, 'opened', 'referral', ${ctx.actor.personId}::uuid, ${source === 'csv' ? 'Referral received from a file, ' : 'Referral received from another system, '}::text || eye || ' eye' from opened),
    noted as (
      insert into audit_rows (at, event, person_id, subject_kind, subject_id, site_id, payload)
      select ${at}, 'pathway.opened', ${ctx.actor.personId}::uuid, 'pathway', id::text, ${siteId}::uuid, jsonb_build_object('importId', ${id}::text) from opened)
    select count(*)::int as n from opened`)
  return rows[0]?.n ?? 0
}
