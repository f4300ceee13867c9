import { nhsCheckDigit } from '#shared/domain/patient/identifier'

/** A number of the range 999, which is kept for tests, with a fitting last digit; another for every `n`. */
export function testNhsNumber(n: number): string {
  for (let tries = n * 2; ; tries++) {
    const nine = `999${String(tries).padStart(6, '0')}`
    const last = nhsCheckDigit(nine)
    if (last !== undefined) return `${nine}${last}`
  }
}

export const csvHeader = 'name,birth_date,identifier,telephone,email,address,message_consent,eye,priority,referrer,referrer_email,reason,vision_right,vision_left,sudden_loss,pain_or_redness,flashes_or_floaters,referred_on'

const families = ['Ashgrove', 'Brambling', 'Copperdene', 'Dunsmere', 'Elderfield', 'Fallowmoor', 'Gorsewell', 'Hazelbeck', 'Ivyhythe', 'Junipere']
/** A line of a file of referrals, of an invented person. */
export function csvLineOf(n: number, change: Partial<Record<string, string>> = {}): string {
  const cells: Record<string, string> = {
    name: `Orla${n} ${families[n % 10]}`, birth_date: `19${40 + n % 20}-0${1 + n % 9}-1${n % 9}`, identifier: '', telephone: `07700 900${String(n % 1000).padStart(3, '0')}`, email: '', address: '2 Heron Way, Ferncombe', message_consent: 'yes', eye: n % 3 ? 'right' : 'both', priority: 'routine',
    referrer: 'Harbour Lane Opticians', referrer_email: 'referrals@harbour-lane.example.org', reason: 'Blurred sight', vision_right: '6/18', vision_left: '6/12', sudden_loss: 'no', pain_or_redness: 'no', flashes_or_floaters: 'no', referred_on: '', ...change,
  }
  return csvHeader.split(',').map(name => /[",\n]/.test(cells[name] ?? '') ? `"${(cells[name] ?? '').replaceAll('"', '""')}"` : cells[name] ?? '').join(',')
}
