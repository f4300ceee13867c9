import { sql } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { maySeePathway } from '#server/policies/scope'
import type { Eye } from '#shared/domain/pathway/vocabulary'
import type { Actor } from '#shared/domain/people/vocabulary'
import type { KnownPerson } from '#shared/domain/referral/decide-fate'

export interface Sought { line: number, name: string, birthDate: string, identifier: string | null }
interface Row { line: number, id: string, identifier: string | null, record_number: string, site_name: string, same_name: boolean, same_birth: boolean, same_identifier: boolean, has_died: boolean, open_eyes: Eye[], places: { siteId: string, practiceId: string | null }[] }

/**
 * For a batch of lines, everybody who may be one of them: one query whatever the batch. Unscoped on purpose, like `unscopedFindAlike`;
 * what a caller may not open is marked, and told no further.
 */
export async function unscopedFindKnown(db: Queryable, actor: Actor, sought: readonly Sought[]): Promise<Map<number, KnownPerson[]>> {
  const found = new Map<number, KnownPerson[]>()
  if (!sought.length) return found
  const given = JSON.stringify(sought.map(each => ({ line: each.line, name: each.name.toLowerCase(), birth: each.birthDate, identifier: each.identifier })))
  const { rows } = await db.execute<Row & Record<string, unknown>>(sql`
    with sought as materialized (select * from jsonb_to_recordset(${given}::jsonb) as s(line int, name text, birth date, identifier text)),
    hits as (
      select s.line, p.id from sought s join patients p on p.birth_date = s.birth and lower(p.name) = s.name where p.merged_into_id is null
      union select s.line, p.id from sought s join patients p on p.birth_date = s.birth and lower(regexp_replace(p.name, '\\s+', ' ', 'g')) = s.name where p.merged_into_id is null
      union select s.line, p.id from sought s join patients p on p.identifier = s.identifier where p.merged_into_id is null)
    select h.line, p.id, p.identifier, p.record_number, site.name as site_name, p.died_on is not null as has_died,
      lower(regexp_replace(p.name, '\\s+', ' ', 'g')) = s.name as same_name, p.birth_date = s.birth as same_birth, coalesce(p.identifier = s.identifier, false) as same_identifier,
      coalesce((select jsonb_agg(w.eye) from pathways w where w.patient_id = p.id and w.state <> 'closed' and w.stage <> 'discharge'), '[]') as open_eyes,
      coalesce((select jsonb_agg(jsonb_build_object('siteId', w.site_id, 'practiceId', w.practice_id)) from pathways w where w.patient_id = p.id), '[]') as places
    from hits h join sought s on s.line = h.line join patients p on p.id = h.id join sites site on site.id = p.site_id
    order by h.line, p.record_number`)
  for (const row of rows) {
    const person: KnownPerson = { id: row.id, recordNumber: row.record_number, siteName: row.site_name, sameName: row.same_name, sameBirthDate: row.same_birth, sameIdentifier: row.same_identifier, identifier: row.identifier, isVisible: row.places.some(place => maySeePathway(actor, place)), hasDied: row.has_died, openEyes: row.open_eyes }
    found.set(row.line, [...found.get(row.line) ?? [], person])
  }
  return found
}
