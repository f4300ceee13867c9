import type { Language } from '#shared/domain/messaging/vocabulary'

/** What each language calls itself. */
export const languageNames: Readonly<Record<Language, string>> = { en: 'English', cy: 'Cymraeg', pl: 'Polski', ar: 'العربية', bn: 'বাংলা', pa: 'ਪੰਜਾਬੀ', ur: 'اردو' }
