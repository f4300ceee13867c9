import { identifierFrom } from '#shared/domain/patient/identifier'

export interface NamedPerson { name: string, birthDate: string | null, identifiers: readonly string[] }

const plain = (text: string) => text.normalize('NFD').replace(/\p{M}/gu, '').toLowerCase().split(/[^\p{L}\p{N}]+/u).filter(Boolean)

/**
 * What does not fit between our patient and the person whom a device's file names; empty when all three fit. The file's name is
 * a DICOM person name: family, given, middle, prefix, suffix (PS3.5 6.2.1). Every part of the family name and the first given name have to be in ours.
 */
export function differences(ours: NamedPerson, file: { name: string, birthDate: string | null, identifier: string }): ('name' | 'birthDate' | 'identifier')[] {
  const [family = '', given = ''] = file.name.split('=')[0]?.split('^') ?? []
  const known = plain(ours.name)
  const familyParts = plain(family)
  const [firstGiven] = plain(given)
  const sameName = familyParts.length > 0 && firstGiven !== undefined && [...familyParts, firstGiven].every(part => known.includes(part))
  const identifier = identifierFrom(file.identifier)
  const found: ('name' | 'birthDate' | 'identifier')[] = []
  if (!sameName) found.push('name')
  if (file.birthDate === null || file.birthDate !== ours.birthDate) found.push('birthDate')
  if (identifier === null || !ours.identifiers.some(each => identifierFrom(each) === identifier)) found.push('identifier')
  return found
}
