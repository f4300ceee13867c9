import type { Language } from '#shared/domain/messaging/vocabulary'

/**
 * Beginnings of words that tell a stranger what a message is about. A neutral text holds none of them, in any
 * language: telephones are shared and numbers get new owners. Languages other than English are short lists from
 * memory, to be completed by the native reader who checks the texts.
 */
const stems: Readonly<Record<Language, readonly string[]>> = {
  en: ['eye', 'cataract', 'operat', 'surg', 'lens', 'implant', 'drop', 'tablet', 'medicine', 'medication', 'antibiotic', 'steroid', 'left', 'right', 'vision', 'sight', 'acuity', 'pressure', 'glaucoma', 'retina', 'cornea', 'macula', 'infect', 'inflam', 'endophth', 'pain', 'blood', 'swell', 'oedema', 'diagnos', 'finding', 'result', 'biometry', 'anaesth', 'ophthalm', 'optom', 'cancer', 'patient'],
  cy: ['llygad', 'llygaid', 'lygad', 'lygaid', 'llawdriniaeth', 'lawdriniaeth', 'llawfeddyg', 'golwg', 'olwg', 'diferion', 'ddiferion', 'chwith', 'poen ', 'canlyniad'],
  pl: ['oko', 'oka', 'oku', 'ocz', 'zaćm', 'operac', 'chirurg', 'zabieg', 'soczew', 'kropl', 'wzrok', 'lew', 'praw', 'ból', 'bólu', 'wynik', 'lek '],
  ar: ['عين', 'عينك', 'العين', 'الساد', 'الماء الأبيض', 'عملية', 'العملية', 'عمليتك', 'جراح', 'الجراح', 'عدسة', 'العدسة', 'قطرة', 'قطرات', 'القطرة', 'البصر', 'بصرك', 'اليمنى', 'اليسرى', 'ألم', 'الألم'],
  bn: ['চোখ', 'ছানি', 'অপারেশন', 'অস্ত্রোপচার', 'লেন্স', 'ড্রপ', 'দৃষ্টি', 'ব্যথা', 'ডান', 'বাম', 'ওষুধ'],
  pa: ['ਅੱਖ', 'ਮੋਤੀਆ', 'ਓਪਰੇਸ਼ਨ', 'ਆਪਰੇਸ਼ਨ', 'ਲੈਂਸ', 'ਬੂੰਦ', 'ਨਜ਼ਰ', 'ਦਰਦ', 'ਸੱਜ', 'ਖੱਬ', 'ਦਵਾਈ'],
  ur: ['آنکھ', 'موتیا', 'آپریشن', 'لینس', 'قطرے', 'نظر', 'بینائی', 'درد', 'دائیں', 'بائیں', 'دوا'],
}

/** The clinical words in a text (English ones always, and those of its language). An empty list means neutral. */
export function clinicalWordsIn(text: string, language: Language): string[] {
  const words = text.toLowerCase().normalize('NFC').split(/[^\p{L}\p{M}\p{N}]+/u).map(word => `${word} `)
  const watched = [...new Set([...stems.en, ...stems[language]])].map(stem => stem.normalize('NFC'))
  return watched.filter(stem => words.some(word => word.startsWith(stem)) || (stem.trim().includes(' ') && text.includes(stem)))
}
