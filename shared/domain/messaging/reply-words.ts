/**
 * The words by which a patient's reply is understood, as people type them on a telephone. Every list is read after
 * `normaliseReply`, so case, accents, apostrophes and punctuation do not matter here.
 *
 * English is ours (common practice). Welsh, Polish, Arabic, Bengali, Punjabi and Urdu are short lists from memory:
 * a native reader must check them before a site relies on them. What no list knows goes to a person.
 */

/** Anything of this, anywhere in a reply, is worry. Too wide on purpose: a false alarm costs a call, a missed one an eye. */
export const worriedWords: readonly string[] = [
  // pain
  'pain', 'pains', 'painful', 'painfull', 'paining', 'hurt', 'hurts', 'hurting', 'ache', 'aches', 'aching', 'achy', 'sore', 'soreness', 'throbbing', 'throbs', 'stabbing', 'stinging', 'stings', 'burning', 'burns', 'agony', 'unbearable', 'headache', 'gritty',
  // getting worse
  'worse', 'worst', 'worsening', 'deteriorating', 'not right', 'something wrong', 'is wrong', 'went wrong', 'gone wrong', 'very bad', 'getting bad', 'not good', 'not well', 'not ok', 'not okay', 'not fine', 'unwell',
  // sight
  'cannot see', 'could not see', 'not see', 'not able to see', 'unable to see', 'no sight', 'no vision', 'lost sight', 'lost my sight', 'lost vision', 'lost my vision', 'losing sight', 'losing my sight', 'losing vision', 'losing my vision', 'sight gone', 'vision gone', 'sight has gone', 'vision has gone',
  'blind', 'blinded', 'blur', 'blurry', 'blury', 'blurred', 'blurring', 'fuzzy', 'foggy', 'hazy', 'cloudy', 'misty', 'dimmer', 'gone dim', 'very dim', 'is dim', 'gone dark', 'went dark', 'all dark', 'gone black', 'went black', 'all black', 'black spot', 'black spots', 'double vision', 'seeing double', 'see double', 'curtain', 'shadow', 'shadows', 'flash', 'flashes', 'flashing', 'flashing lights', 'floater', 'floaters', 'cobwebs',
  // what is seen or felt
  'blood', 'bleeding', 'bleed', 'bleeds', 'bloody', 'bloodshot', 'red', 'redder', 'redness', 'swollen', 'swolen', 'swelling', 'swelled', 'puffy', 'pus', 'discharge', 'sticky', 'gunk', 'infection', 'infected', 'watering badly', 'sick', 'vomit', 'vomiting', 'vomited', 'throwing up', 'threw up', 'nausea', 'nauseous', 'fever', 'feel ill', 'feeling ill', 'i am ill', 'im ill',
  // accidents
  'fell', 'a fall', 'fallen', 'injury', 'injured', 'accident', 'hit my', 'hit it', 'hit in', 'got hit', 'poked', 'bumped', 'knocked', 'scratched', 'allergic', 'allergy', 'reaction',
  // alarm
  'worried', 'worry', 'worrying', 'worries', 'concerned', 'scared', 'frightened', 'afraid', 'anxious', 'panic', 'panicking', 'emergency', 'urgent', 'urgently', 'ambulance', 'hospital now', 'sos', '999', '111', '112', 'need help', 'help me', 'please help', 'help please',
  // Welsh
  'poen', 'poenus', 'brifo', 'gwaeth', 'gwaethygu', 'gwaed', 'gwaedu', 'methu gweld', 'ddim yn gweld', 'ddim yn gallu gweld', 'chwyddo', 'chwydu', 'coch', 'poeni', 'pryderus', 'argyfwng',
  // Polish
  'bol', 'boli', 'bolu', 'bole', 'gorzej', 'pogorszenie', 'krew', 'krwi', 'krwawi', 'krwawienie', 'nie widze', 'niewidze', 'slabo widze', 'zle widze', 'opuchlizna', 'spuchniete', 'spuchlo', 'czerwone', 'wymioty', 'wymiotuje', 'martwie', 'boje sie', 'pilne', 'pomocy',
  // Arabic
  'ألم', 'الألم', 'آلام', 'وجع', 'يولم', 'يولمني', 'يوجعني', 'اسوا', 'سيي', 'دم', 'نزيف', 'لا اري', 'لا اقدر اري', 'ما اشوف', 'لا استطيع الرويه', 'احمرار', 'تورم', 'قيء', 'تقيأت', 'قلق', 'قلقان', 'خايف', 'طاري', 'طواري', 'ساعدوني', 'النجده',
  // Bengali
  'ব্যথা', 'ব্যাথা', 'বেদনা', 'যন্ত্রণা', 'খারাপ', 'রক্ত', 'দেখতে পাচ্ছি না', 'দেখতে পাই না', 'দেখতে পারছি না', 'ঝাপসা', 'লাল', 'ফোলা', 'ফুলে', 'বমি', 'চিন্তিত', 'ভয়', 'জরুরি', 'সাহায্য', 'batha', 'betha', 'bytha',
  // Punjabi
  'ਦਰਦ', 'ਪੀੜ', 'ਖੂਨ', 'ਲਹੂ', 'ਮਾੜਾ', 'ਖਰਾਬ', 'ਦਿਖਾਈ ਨਹੀਂ', 'ਦਿਸਦਾ ਨਹੀਂ', 'ਨਹੀਂ ਦਿਸਦਾ', 'ਨਜ਼ਰ ਨਹੀਂ', 'ਧੁੰਦਲਾ', 'ਲਾਲ', 'ਸੋਜ', 'ਉਲਟੀ', 'ਚਿੰਤਾ', 'ਡਰ', 'ਐਮਰਜੈਂਸੀ', 'ਮਦਦ', 'dard', 'peer', 'khoon',
  // Urdu
  'درد', 'تکلیف', 'خون', 'خراب', 'بدتر', 'نظر نہیں', 'دکھائی نہیں', 'دھندلا', 'سرخ', 'لال', 'سوجن', 'الٹی', 'پریشان', 'پریشانی', 'ڈر', 'ایمرجنسی', 'مدد', 'takleef', 'pareshan',
]

/** Signs that worry when drawn: hurt, ill, blood, tears, alarm. */
export const worriedSigns: readonly string[] = ['🤕', '🤒', '🤢', '🤮', '🩸', '😖', '😣', '😫', '😭', '😢', '😱', '😰', '😨', '🆘', '🚑', '🚨']
export const confirmingSigns: readonly string[] = ['👍', '👌', '✅', '✔', '🆗']

/** These would read as worry, and are politeness. Taken out before worry is looked for. */
export const notWorry: readonly string[] = ['no worries', 'not to worry', 'do not worry', 'dim problem']

/** Clear on their own, first in a reply, whatever follows. */
export const strongYes: readonly string[] = [
  'yes', 'yess', 'yep', 'yeah', 'yea', 'yup', 'y', 'confirm', 'confirmed', 'i confirm', 'will be there', 'i will be there', 'will come', 'i will come', 'am coming', 'i am coming', 'im coming', 'see you then', 'see you tomorrow', 'see you there',
  'ie', 'ydw', 'byddaf', 'cadarnhau', 'tak', 'potwierdzam', 'bede', 'نعم', 'ايوه', 'ايوا', 'اوكد', 'تاكيد', 'ساحضر', 'হ্যাঁ', 'হ্যা', 'জি হ্যাঁ', 'আসব', 'নিশ্চিত', 'ਹਾਂ', 'ਹਾਂਜੀ', 'ਹਾਂ ਜੀ', 'ਜੀ ਹਾਂ', 'ਆਵਾਂਗਾ', 'ਆਵਾਂਗੀ', 'ہاں', 'جی ہاں', 'ہاں جی', 'اوں گا', 'اوں گی', 'haan', 'han ji', 'ji haan', 'hyan',
]
/** A yes only when nothing else is said: "ok to drive?" is a question. */
export const weakYes: readonly string[] = [
  'ok', 'okay', 'oki', 'okey', 'k', 'fine', 'sure', 'great', 'perfect', 'lovely', 'good', 'no problem', 'no worries', 'will do', 'that is fine', 'thats fine', 'all good', 'of course', 'coming', 'i can come', 'i can make it',
  'iawn', 'dobrze', 'حسنا', 'تمام', 'موافق', 'ঠিক আছে', 'জি', 'ਠੀਕ ਹੈ', 'ਜੀ', 'ٹھیک ہے', 'جی', 'theek hai', 'thik ache',
]
/** May stand beside a yes without changing it. */
export const courtesies: readonly string[] = [
  'thank you very much', 'thank you so much', 'thank you', 'thanks', 'thankyou', 'thx', 'ta', 'cheers', 'many thanks', 'please', 'pls', 'sorry', 'so sorry', 'hi', 'hello', 'dear', 'doctor', 'nurse', 'good morning', 'good evening', 'to confirm', 'my appointment', 'the appointment', 'appointment', 'my visit', 'visit', 'tomorrow', 'today', 'then', 'x', 'xx', 'kind regards', 'regards',
  'diolch', 'diolch yn fawr', 'dziekuje', 'prosze', 'شكرا', 'شكرا لكم', 'ধন্যবাদ', 'ਧੰਨਵਾਦ', 'ਸ਼ੁਕਰੀਆ', 'شکریہ',
]

export const cannotComePhrases: readonly string[] = [
  'cannot come', 'cannot make it', 'cannot make the', 'cannot make my', 'cannot make that', 'cannot make this', 'cannot make today', 'cannot make tomorrow', 'cannot attend', 'cannot be there', 'cannot get there', 'cannot do today', 'cannot do tomorrow', 'cannot do that', 'cannot do this', 'cannot keep my appointment', 'cannot keep the appointment',
  'will not come', 'will not be there', 'will not be coming', 'will not make it', 'will not be able to come', 'will not be able to make', 'will not be able to attend', 'not able to come', 'not able to make it', 'not able to attend', 'unable to come', 'unable to make it', 'unable to attend', 'not coming', 'do not want to come', 'not available',
  'change my appointment', 'change my visit', 'change the appointment', 'change the visit', 'change the time', 'change the date', 'change the day', 'change time', 'change date', 'change day', 'change appointment', 'rearrange', 'reschedule', 'rebook', 'another day', 'another time', 'different day', 'different time', 'postpone', 'no transport', 'no lift',
  'methu dod', 'ddim yn gallu dod', 'nie moge przyjsc', 'nie moge przyjechac', 'nie przyjde', 'nie dam rady', 'inny termin',
  'لا استطيع الحضور', 'لا استطيع ان احضر', 'لا اقدر احضر', 'لن احضر', 'لن استطيع الحضور', 'ما اقدر اجي', 'موعد اخر',
  'আসতে পারব না', 'আসতে পারবো না', 'আসতে পারছি না', 'আসব না', 'অন্য দিন', 'ਨਹੀਂ ਆ ਸਕਦਾ', 'ਨਹੀਂ ਆ ਸਕਦੀ', 'ਨਹੀਂ ਆਵਾਂਗਾ', 'ਨਹੀਂ ਆਵਾਂਗੀ', 'ਹੋਰ ਦਿਨ', 'نہیں ا سکتا', 'نہیں ا سکتی', 'نہیں اوں گا', 'نہیں اوں گی', 'دوسرا دن', 'nahi aa sakta', 'nahi aa sakti',
]

/** The word our texts offer for moving a visit; inside a sentence it may mean anything. */
export const changeReplies: readonly string[] = ['change', 'change it', 'move it', 'move', 'newid', 'zmiana', 'zmienic', 'تغيير', 'পরিবর্তন', 'ਬਦਲੋ', 'تبدیل']

/** Could end the texts or the visit: asked about, never guessed. */
export const ambiguousWords: readonly string[] = ['cancel', 'cancelled', 'cancell', 'cancle', 'canceled', 'cancellation', 'canslo', 'anuluj', 'anulowac', 'odwolac', 'odwoluje', 'rezygnuje', 'الغاء', 'الغ', 'বাতিল', 'ਰੱਦ', 'منسوخ', 'کینسل']

/** The same, but only as the whole reply: "at the end of the road" is neither. */
export const ambiguousReplies: readonly string[] = ['end', 'the end', 'finish', 'diwedd', 'koniec']

/** Only when they are the whole reply. */
export const stopReplies: readonly string[] = [
  'stop', 'stopp', 'stop all', 'stopall', 'unsubscribe', 'quit', 'opt out', 'optout', 'stop texts', 'stop texting', 'stop texting me', 'stop text', 'stop messages', 'stop messaging', 'stop messaging me', 'stop sending', 'stop sending me texts', 'stop sending me messages', 'stop sending texts', 'stop sending messages', 'stop the texts', 'stop these texts', 'stop the messages', 'stop these messages', 'no more texts', 'no more messages', 'remove me', 'do not text', 'do not text me',
  'stopio', 'dim mwy o negeseuon', 'nie wysylac', 'koniec sms', 'ايقاف', 'توقف', 'اوقف', 'বন্ধ', 'বন্ধ করুন', 'ਬੰਦ', 'ਬੰਦ ਕਰੋ', 'بند', 'بند کریں',
]
export const startReplies: readonly string[] = ['start', 'unstop', 'resume', 'start texts', 'start texting', 'start texting me', 'text me again', 'dechrau', 'wznow', 'ابدا', 'শুরু', 'ਸ਼ੁਰੂ', 'شروع']

export const noReplies: readonly string[] = ['no', 'nope', 'nah', 'n', 'na', 'nac ydw', 'nie', 'لا', 'না', 'ਨਹੀਂ', 'ਨਹੀਂ ਜੀ', 'نہیں', 'جی نہیں', 'nahi']
/** Turn a yes into something a person must read. */
export const negations: readonly string[] = ['no', 'not', 'nope', 'cannot', 'never', 'nie', 'ddim', 'لا', 'لن', 'না', 'ਨਹੀਂ', 'نہیں']

export const wrongPersonPhrases: readonly string[] = ['wrong number', 'wrong person', 'who is this', 'whos this', 'who are you', 'who r u', 'do not know you', 'not my appointment', 'not me', 'rhif anghywir', 'zly numer', 'pomylka', 'kto to', 'رقم خطا', 'من انت', 'ভুল নম্বর', 'কে আপনি', 'ਗਲਤ ਨੰਬਰ', 'غلط نمبر', 'کون ہے']
