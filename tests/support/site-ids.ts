import type pg from 'pg'
import type { Ids } from '#tests/support/routes'

const one = async (pool: pg.Pool, sql: string, values: unknown[]): Promise<string> => (await pool.query(sql, values)).rows[0]?.id ?? '00000000-0000-4000-8000-000000000000'

/** One record of each kind at a site, made where the demo has none, so that a refusal is never only a missing row. */
export async function idsOf(pool: pg.Pool, siteId: string, practice: string): Promise<Ids> {
  const of = (sql: string, ...more: unknown[]) => one(pool, sql, [siteId, ...more])
  const surgeon = await of('select p.id from people p join roles r on r.person_id = p.id where r.site_id = $1 and r.role in (\'surgeon\', \'clinical-lead\') limit 1')
  const visit = await of('select v.id from visits v join pathways p on p.id = v.pathway_id where v.site_id = $1 and v.state = \'booked\' and p.state = \'open\' order by v.starts_at desc limit 1')
  const { rows: [known] } = await pool.query('select pathway_id, patient_id from visits where id = $1', [visit])
  const pathway: string = known.pathway_id
  await pool.query('update pathways set practice_id = $2 where id = $1', [pathway, practice])
  const made = async (sql: string, values: unknown[]) => (await pool.query(sql, values)).rows[0].id as string
  const patient = known.patient_id as string
  const freshPatient = await made('insert into patients (name, birth_date, record_number, site_id, created_at) values ($2, \'1951-03-04\', $3, $1, now()) returning id', [siteId, `Matrix Person ${siteId.slice(0, 4)}`, `MX${siteId.slice(0, 6)}`])
  const fresh = await made('insert into pathways (patient_id, eye, site_id, referred_at, stage_since, practice_id) values ($1, \'right\', $2, now(), now(), $3) returning id', [freshPatient, siteId, practice])
  await pool.query('insert into referrals (pathway_id, referrer, reason, source) values ($1, \'A practice\', \'Blurred sight\', \'form\')', [fresh])
  const open = await of('select id from escalations where pathway_id = $2 and site_id = $1 and state <> \'closed\'', pathway)
  const escalation = open.startsWith('00000000') ? await made('insert into escalations (pathway_id, patient_id, site_id, urgency, reasons, raised_at, answer_by) values ($1, $2, $3, \'this-week\', $4, now(), now() + interval \'5 days\') returning id', [pathway, patient, siteId, JSON.stringify([{ ruleId: 'hand.raised', ruleVersion: 1, urgency: 'this-week', sentence: 'Somebody asks.', source: 'common practice', findings: [] }])]) : open
  const message = await made('insert into messages (kind, recipient_key, subject_key, occasion, channel, patient_id, pathway_id, site_id, to_address, body, state, due_at, expires_at, created_at) values (\'visit.reminder\', $1, $2, \'matrix\', \'text\', $3, $4, $5, \'+447700900812\', \'Ring.\', \'held\', now(), now() + interval \'1 day\', now()) returning id', [`patient:${patient}`, `visit:${visit}`, patient, pathway, siteId])
  const reply = await made('insert into inbound_texts (provider_id, from_number, body, received_at, patient_id, site_id, meaning) values ($1, \'+447700900812\', \'What time?\', now(), $2, $3, \'words\') returning id', [`SMmatrix${siteId}`, patient, siteId])
  const list = await made('insert into theatre_lists (site_id, surgeon_id, room, starts_at, ends_at) values ($1, $2, \'Matrix\', now() + interval \'40 days\', now() + interval \'40 days 4 hours\') returning id', [siteId, surgeon])
  const listed = await made('insert into theatre_cases (list_id, pathway_id, position, planned_minutes, state) values ($1, $2, 1, 30, \'planned\') returning id', [list, fresh])
  const taken = await made('insert into referral_imports (site_id, person_id, file_name, state, started_at, progress_at) values ($1, $2, \'matrix.csv\', \'checked\', now(), now()) returning id', [siteId, surgeon])
  // Its bytes are nowhere: who may see it is told so, everybody else that there is nothing.
  const attachment = await made('insert into attachments (patient_id, pathway_id, name, media_type, bytes, sha256, stored_as, added_at) values ($1, $2, \'matrix.pdf\', \'application/pdf\', 1, \'0\', $3, now()) returning id', [patient, pathway, `00/${crypto.randomUUID()}`])
  const merge = await made('insert into patient_merges (kept_id, merged_id, reason, before, signed_by, signed_at) values ($1, $2, \'Matrix\', \'{}\', $3, now()) returning id', [patient, freshPatient, surgeon])
  return {
    other: freshPatient, import: taken, attachment, merge,
    site: siteId, surgeon, practice, patient, pathway, fresh, visit, escalation, list, case: listed,
    biometry: await of('select b.id from biometries b join pathways p on p.id = b.pathway_id where p.site_id = $1 and p.id = $2 order by b.version desc limit 1', pathway),
    review: visit,
    place: await of('select s.id from session_places s join clinic_sessions c on c.id = s.session_id where c.site_id = $1 and c.starts_at > now() limit 1'),
    session: await of('select id from clinic_sessions where site_id = $1 and starts_at > now() limit 1'),
    message, reply,
  }
}
