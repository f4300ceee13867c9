import { inZone } from '#shared/domain/messaging/quiet-hours'
import type { Language } from '#shared/domain/messaging/vocabulary'

/** Latin digits everywhere: they are what stands on clocks, doors and letters here. */
const locales: Readonly<Record<Language, string>> = {
  en: 'en-GB', cy: 'cy', pl: 'pl', ar: 'ar-u-nu-latn', bn: 'bn-u-nu-latn', pa: 'pa-u-nu-latn', ur: 'ur-u-nu-latn',
}

/**
 * The {date} and {time} of a moment for a message: weekday, day and month in the reader's language, and HH:mm, by the
 * clock of the site. Month and day names come from the Unicode locale data that the runtime carries.
 */
export function visitWords(startsAt: Date, siteZone: string, language: Language): { date: string, time: string } {
  const moment = inZone(startsAt, siteZone)
  const format = new Intl.DateTimeFormat(locales[language], { weekday: 'long', day: 'numeric', month: 'long', timeZone: siteZone })
  const part = (type: Intl.DateTimeFormatPartTypes) => format.formatToParts(startsAt).find(each => each.type === type)?.value ?? ''
  // English differs between versions of the locale data by a comma; the parts do not.
  const date = language === 'en' ? `${part('weekday')} ${part('day')} ${part('month')}` : format.format(startsAt)
  return { date, time: moment.toPlainTime().toString({ smallestUnit: 'minute' }) }
}
