import fc from 'fast-check'
import { parse } from 'csv-parse/sync'
import { describe, expect, test } from 'vitest'
import { csvLine } from '#shared/domain/referral/csv-cell'
import { decideFate } from '#shared/domain/referral/decide-fate'
import type { KnownPerson } from '#shared/domain/referral/decide-fate'
import type { ImportedReferral } from '#shared/domain/referral/import-row'
import { referralSettingsOf } from '#shared/domain/referral/site-settings'
import { waitClock } from '#shared/domain/referral/waiting'
import { differences } from '#shared/domain/patient/same-person'

const given: ImportedReferral = { name: 'Hester Wyndlow', birthDate: '1941-03-04', identifier: '9434765919', phone: null, email: null, address: '', messageConsent: null, eyes: ['right'], priority: 'routine', referrer: 'Harbour Lane', referrerEmail: null, reason: 'Glare', visionRight: null, visionLeft: null, redFlags: {}, referredOn: null }
const known = (change: Partial<KnownPerson> = {}): KnownPerson => ({ id: 'p1', recordNumber: 'FE1', siteName: 'Ferncombe', sameName: true, sameBirthDate: true, sameIdentifier: true, identifier: '9434765919', isVisible: true, hasDied: false, openEyes: [], ...change })

describe('the fate of a line', () => {
  test.each<[string, KnownPerson[], number | undefined, string, string | null]>([
    ['nobody alike', [], undefined, 'new', null],
    ['name, birth date and identifier fit', [known()], undefined, 'new-pathway', 'p1'],
    ['its eye has an open pathway', [known({ openEyes: ['right'] })], undefined, 'error', 'p1'],
    ['the other eye has one', [known({ openEyes: ['left'] })], undefined, 'new-pathway', 'p1'],
    ['the patient has died', [known({ hasDied: true })], undefined, 'error', 'p1'],
    ['the identifier with another birth date', [known({ sameBirthDate: false })], undefined, 'duplicate', 'p1'],
    ['the identifier with another name', [known({ sameName: false })], undefined, 'duplicate', 'p1'],
    ['name and birth date with another identifier', [known({ sameIdentifier: false, identifier: '9990000026' })], undefined, 'duplicate', 'p1'],
    ['name and birth date alone', [known({ sameIdentifier: false, identifier: null })], undefined, 'duplicate', 'p1'],
    ['two people alike', [known(), known({ id: 'p2' })], undefined, 'duplicate', 'p1'],
    ['somebody of another site', [known({ isVisible: false })], undefined, 'duplicate', null],
    ['the same person on an earlier line', [known()], 7, 'duplicate', null],
  ])('%s', (_name, people, earlier, fate, patientId) => {
    expect(decideFate(given, people, earlier)).toMatchObject({ fate, patientId })
    if (fate === 'duplicate' || fate === 'error') expect(decideFate(given, people, earlier).problems[0]?.message.length).toBeGreaterThan(10)
  })

  test('is never a pathway for somebody of whom not all three fit, or whom the caller may not open', () => {
    const bool = fc.boolean()
    fc.assert(fc.property(fc.record({ sameName: bool, sameBirthDate: bool, sameIdentifier: bool, isVisible: bool, hasDied: bool }), (change) => {
      const { fate } = decideFate(given, [known(change)], undefined)
      expect(fate).not.toBe('new')
      if (fate === 'new-pathway') expect(change).toEqual({ sameName: true, sameBirthDate: true, sameIdentifier: true, isVisible: true, hasDied: false })
    }))
  })
})

test('a cell that a spreadsheet would run is led by an apostrophe; every other text comes back as it was', () => {
  expect(csvLine(['=1+1', '+44', '-3', '@x', '\t=1', ' =1', '＝1', 'a,b', '6/12', 7, null])).toBe(`"'=1+1","'+44","'-3","'@x","'\t=1","' =1","'＝1","a,b",6/12,7,\r\n`)
  fc.assert(fc.property(fc.array(fc.string({ unit: 'grapheme' }), { minLength: 2, maxLength: 5 }), (cells) => {
    const [read = []] = parse(csvLine(['x', ...cells]), { relax_column_count: true }) as string[][]
    read.slice(1).forEach((cell, index) => {
      expect([cells[index], `'${cells[index]}`]).toContain(cell)
      expect(cell).not.toMatch(/^[=+\-@\t\r]/)
    })
  }))
})

test('the wait counts from the referral; surgery expected after the target could pass it', () => {
  const now = new Date('2026-10-15T09:00:00Z')
  const of = (weeks: number) => waitClock({ referredAt: new Date(now.getTime() - weeks * 604_800_000), now, targetWeeks: 18, weeksToSurgery: 6 })
  expect([of(0).standing, of(12).standing, of(12.01).standing, of(18).standing, of(18.01).standing]).toEqual(['within', 'within', 'could-pass', 'could-pass', 'passed'])
  expect(of(13.3).waitedDays).toBe(93)
})

test('a site that has set nothing, or nonsense, has the defaults', () => {
  expect(referralSettingsOf({})).toEqual({ identifierCheck: 'none', waitTargetWeeks: 18, weeksToSurgery: 6 })
  expect(referralSettingsOf({ identifierCheck: 'x', waitTargetWeeks: 0, weeksToSurgery: '6' })).toEqual({ identifierCheck: 'none', waitTargetWeeks: 18, weeksToSurgery: 6 })
  expect(referralSettingsOf({ identifierCheck: 'nhs-number', waitTargetWeeks: 12, weeksToSurgery: 4.5 })).toEqual({ identifierCheck: 'nhs-number', waitTargetWeeks: 12, weeksToSurgery: 4.5 })
})

test('a device names our patient by family and first given name, birth date and an identifier', () => {
  const ours = { name: 'Zoë Mary Aldermoor-Finch', birthDate: '1947-09-19', identifiers: ['FE1', '9434765919'] }
  const file = { name: 'ALDERMOOR-FINCH^ZOE', birthDate: '1947-09-19', identifier: '943 476 5919' }
  expect(differences(ours, file)).toEqual([])
  expect(differences(ours, { ...file, name: 'Aldermoor-Finch^Zoë^Mary^Mrs=別名' })).toEqual([])
  expect(differences(ours, { ...file, name: 'Aldermoor^Mary' })).toEqual([])
  expect(differences(ours, { ...file, name: 'Finch^Zelda' })).toEqual(['name'])
  expect(differences(ours, { ...file, name: 'Aldermoor-Finch' })).toEqual(['name'])
  expect(differences(ours, { name: '', birthDate: null, identifier: '' })).toEqual(['name', 'birthDate', 'identifier'])
})
