import { readdirSync, readFileSync } from 'node:fs'
import { expect, test } from 'vitest'
import { fhirPath, fhirResource, referralBundle } from '#shared/contracts/fhir'

const folder = new URL('../../fixtures/fhir/', import.meta.url)
const examples = readdirSync(folder).filter(name => /^(Patient|ServiceRequest|Practitioner|Organization)-/.test(name))
const read = (name: string) => JSON.parse(readFileSync(new URL(name, folder), 'utf8')) as unknown

test.each(examples)('the specification’s own example %s has the structure that is asked for', (name) => {
  const answer = fhirResource.safeParse(read(name))
  expect(answer.error?.issues.map(issue => `${issue.path.join('.')}: ${issue.message}`) ?? []).toEqual([])
})

test.each(readdirSync(folder).filter(name => name.startsWith('Bundle-')))('the specification’s %s is a bundle, but no referral', (name) => {
  const answer = referralBundle.safeParse(read(name))
  expect(answer.success).toBe(false)
  expect(answer.error?.issues.length).toBeGreaterThan(0)
})

test('a place in a bundle is written as FHIRPath writes it', () => {
  expect(fhirPath(['entry', 2, 'resource', 'name', 0, 'given'])).toBe('Bundle.entry[2].resource.name[0].given')
})
