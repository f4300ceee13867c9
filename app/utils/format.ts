import dayjs from 'dayjs'
import timezone from 'dayjs/plugin/timezone'
import utc from 'dayjs/plugin/utc'

dayjs.extend(utc)
dayjs.extend(timezone)

/** Both demo sites keep this clock. A unit elsewhere passes its own zone. */
const siteZone = 'Europe/London'

/** What a date may arrive as: ISO text, with or without a time, or a Date. */
export type When = string | Date

/** A bare date (`2026-10-15`, a birth date) is a day on the calendar, not a moment, so no zone may move it. */
function at(when: When, zone: string) {
  return typeof when === 'string' && /^\d{4}-\d{2}-\d{2}$/.test(when) ? dayjs.utc(when) : dayjs(when).tz(zone)
}

/** `09:06`, on the 24-hour clock. */
export function formatTime(when: When, zone = siteZone): string {
  return at(when, zone).format('HH:mm')
}

/** `Thu 15 October`. */
export function formatDay(when: When, zone = siteZone): string {
  return at(when, zone).format('ddd D MMMM')
}

/** `Thursday 15 October`. */
export function formatLongDay(when: When, zone = siteZone): string {
  return at(when, zone).format('dddd D MMMM')
}

/** `15 October`. */
export function formatDate(when: When, zone = siteZone): string {
  return at(when, zone).format('D MMMM')
}

/** `3 February 1955`: with its year, for birth dates and letters. */
export function formatFullDate(when: When, zone = siteZone): string {
  return at(when, zone).format('D MMMM YYYY')
}

/** `Thu 15 October 09:06`. */
export function formatDayTime(when: When, zone = siteZone): string {
  return at(when, zone).format('ddd D MMMM HH:mm')
}

/** `Today 07:12` on the day itself, `8 October 16:30` otherwise. */
export function formatMoment(when: When, now: When, zone = siteZone): string {
  const moment = at(when, zone)
  return moment.isSame(at(now, zone), 'day') ? `Today ${moment.format('HH:mm')}` : moment.format('D MMMM HH:mm')
}

/** Whole years on the day of `now`. */
export function ageInYears(birthDate: When, now: When, zone = siteZone): number {
  const [born, today] = [at(birthDate, zone), at(now, zone)]
  const beforeBirthday = today.month() < born.month() || (today.month() === born.month() && today.date() < born.date())
  return today.year() - born.year() - (beforeBirthday ? 1 : 0)
}

/** Minutes from `now` until `due`, rounded up while time is left so that "0 min" never shows early; negative when over. */
export function minutesUntil(due: When, now: When): number {
  const minutes = (dayjs(due).valueOf() - dayjs(now).valueOf()) / 60_000
  return Math.ceil(minutes) + 0
}

export interface TimeLeft { figure: string, unit: string, over: boolean }

/** Time left as a large figure and its unit: 45 + `min`, 7 + `h 54`, 3 + `days`, 12 + `min over`. */
export function timeLeftParts(minutes: number): TimeLeft {
  const over = minutes < 0
  const left = Math.abs(minutes)
  const tail = over ? ' over' : ''
  if (left < 60) return { figure: String(left), unit: `min${tail}`, over }
  if (left < 48 * 60) {
    const [hours, rest] = [Math.floor(left / 60), left % 60]
    return { figure: String(hours), unit: `${rest ? `h ${String(rest).padStart(2, '0')}` : 'h'}${tail}`, over }
  }
  return { figure: String(Math.floor(left / 1440)), unit: `days${tail}`, over }
}

/** Time left in words that can be spoken: `45 min`, `7 h 54`, `3 days`, `12 min over`. */
export function formatTimeLeft(minutes: number): string {
  const { figure, unit } = timeLeftParts(minutes)
  return `${figure} ${unit}`
}

/** `Day 8`, `surgery today`, `5 days before surgery`, in the words a thread's label uses. */
export function formatDaysFromSurgery(day: number): string {
  if (day === 0) return 'surgery today'
  if (day > 0) return `day ${day} after surgery`
  return `${-day} ${day === -1 ? 'day' : 'days'} before surgery`
}

/** A dioptre value always carries its sign, with a true minus: `+21.0 D`, `−0.25 D`. */
export function formatDioptres(value: number, decimals = 2): string {
  const fixed = Math.abs(value).toFixed(decimals)
  const sign = Number(fixed) === 0 ? '' : value < 0 ? '−' : '+'
  return `${sign}${fixed} D`
}

/** A British number in the groups in which it is read out: `07700 900386`, `01632 960118`. Others stay as typed. */
export function formatTelephone(number: string): string {
  const national = number.replace(/^\+44/, '0').replace(/\s+/g, '')
  return /^0\d{10}$/.test(national) ? `${national.slice(0, 5)} ${national.slice(5)}` : number
}

const small = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten', 'eleven', 'twelve']

/** Counts in an opening sentence are words up to twelve. */
export function countWord(count: number): string {
  return small[count] ?? String(count)
}

/** `one eye`, `three eyes`, `40 eyes`. */
export function countOf(count: number, one: string, many = `${one}s`): string {
  return `${countWord(count)} ${count === 1 ? one : many}`
}

export function capitalise(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1)
}

/** The instant of a wall-clock time (`10:40`) on the site's day of `day`, as ISO text; `null` for a time that cannot be read. */
export function momentOn(day: When, time: string, zone = siteZone): string | null {
  const [, hours, minutes] = /^([01]?\d|2[0-3]):([0-5]\d)$/.exec(time.trim()) ?? []
  if (hours === undefined || minutes === undefined) return null
  return dayjs.tz(`${at(day, zone).format('YYYY-MM-DD')} ${hours.padStart(2, '0')}:${minutes}`, zone).toISOString()
}
