import type { FieldProblem } from '#shared/domain/errors'
import { eyeLabel } from '#shared/domain/pathway/vocabulary'
import type { Eye } from '#shared/domain/pathway/vocabulary'
import type { ImportedReferral, RowFate } from '#shared/domain/referral/import-row'

/** Somebody who is here and may be the person of a line. */
export interface KnownPerson {
  id: string
  recordNumber: string
  siteName: string
  sameName: boolean
  sameBirthDate: boolean
  sameIdentifier: boolean
  identifier: string | null
  /** Whether the caller may open this record: nobody gives a pathway to a patient of a site that is not theirs. */
  isVisible: boolean
  hasDied: boolean
  openEyes: Eye[]
}

export interface Fate { fate: RowFate, patientId: string | null, problems: FieldProblem[] }

/**
 * What becomes of one checked line. Only name, birth date and identifier together make it somebody known; anything less is
 * looked at by a person first, because both a second record of one person and one record of two people do harm.
 */
export function decideFate(given: ImportedReferral, known: readonly KnownPerson[], sameInFile: number | undefined): Fate {
  const lookAt = (message: string, patientId: string | null, field = 'name'): Fate => ({ fate: 'duplicate', patientId, problems: [{ field, code: 'duplicate', message }] })
  if (sameInFile !== undefined) return lookAt(`The same person is on line ${sameInFile}. For both eyes, write "both" on one line.`, null)
  const [person] = known
  if (!person) return { fate: 'new', patientId: null, problems: [] }
  const where = `record ${person.recordNumber}, ${person.siteName}`
  if (known.length > 1) return lookAt(`${known.length} people who are here may be this one: ${known.map(each => each.recordNumber).join(', ')}.`, person.id)
  if (!person.isVisible) return lookAt(`Somebody alike is known at ${person.siteName} (${person.recordNumber}). Ask there first.`, null)
  if (person.sameIdentifier && !person.sameBirthDate) return lookAt(`This identifier belongs to somebody with another birth date (${where}).`, person.id, 'identifier')
  if (person.sameIdentifier && !person.sameName) return lookAt(`This identifier and birth date belong to somebody with another name (${where}).`, person.id)
  if (!person.sameIdentifier && given.identifier && person.identifier) return lookAt(`Same name and birth date, but another identifier (${where}).`, person.id, 'identifier')
  if (!person.sameIdentifier) return lookAt(`Same name and birth date (${where}).`, person.id)
  if (person.hasDied) return { fate: 'error', patientId: person.id, problems: [{ field: 'name', code: 'died', message: `This patient has died (${where}).` }] }
  const open = given.eyes.filter(eye => person.openEyes.includes(eye))
  if (open.length) return { fate: 'error', patientId: person.id, problems: [{ field: 'eye', code: 'already-open', message: `${open.map(eyeLabel).join(' and ')}: a pathway is open already (${where}).` }] }
  return { fate: 'new-pathway', patientId: person.id, problems: [] }
}
