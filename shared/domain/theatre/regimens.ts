/** Drops after surgery that a site prescribes, by a name that its team uses. 'common practice': a site's own sheet may replace them. */
export interface Regimen { id: string, label: string, drops: { drug: string, perDay: number, days: number }[] }

export const regimens: readonly Regimen[] = [
  { id: 'usual', label: 'Usual four weeks', drops: [{ drug: 'Dexamethasone 0.1 %', perDay: 4, days: 28 }, { drug: 'Chloramphenicol 0.5 %', perDay: 4, days: 14 }] },
  { id: 'two-hourly', label: 'Steroid every two hours', drops: [{ drug: 'Dexamethasone 0.1 %', perDay: 8, days: 7 }, { drug: 'Dexamethasone 0.1 %, then', perDay: 4, days: 28 }, { drug: 'Chloramphenicol 0.5 %', perDay: 4, days: 14 }] },
  { id: 'with-nsaid', label: 'Usual, with an anti-inflammatory', drops: [{ drug: 'Dexamethasone 0.1 %', perDay: 4, days: 28 }, { drug: 'Ketorolac 0.5 %', perDay: 3, days: 28 }, { drug: 'Chloramphenicol 0.5 %', perDay: 4, days: 14 }] },
]

/** Words of an allergy, and the words in a drug's name that belong to it. 'common practice'. */
const families: readonly { allergy: RegExp, drug: RegExp }[] = [
  { allergy: /chloramphenicol/i, drug: /chloramphenicol/i },
  { allergy: /aspirin|nsaid|anti-?inflammator|ibuprofen|diclofenac|ketorolac|nepafenac|bromfenac/i, drug: /ketorolac|nepafenac|bromfenac|diclofenac|flurbiprofen/i },
  { allergy: /steroid|dexamethasone|prednisolone|betamethasone/i, drug: /dexamethasone|prednisolone|betamethasone|fluorometholone|loteprednol/i },
  { allergy: /quinolone|ciprofloxacin|levofloxacin|moxifloxacin|ofloxacin/i, drug: /floxacin/i },
  { allergy: /aminoglycoside|neomycin|gentamicin|tobramycin/i, drug: /neomycin|gentamicin|tobramycin/i },
  { allergy: /sulph|sulf|acetazolamide|dorzolamide|brinzolamide/i, drug: /acetazolamide|dorzolamide|brinzolamide/i },
  { allergy: /benzalkonium|preservative/i, drug: /dexamethasone|chloramphenicol|ketorolac/i },
]

/**
 * Allergies of the record that a prescription touches, each with the drug. A word match, not a pharmacy: an empty answer says
 * nothing was recognised, never that the drops are safe.
 * @param allergies the words of the patient's allergy alerts.
 */
export function allergiesTouched(drops: readonly { drug: string }[], allergies: readonly string[]): { drug: string, allergy: string }[] {
  return allergies.flatMap(allergy => drops.filter(({ drug }) => families.some(each => each.allergy.test(allergy) && each.drug.test(drug)) || firstWord(drug) !== '' && allergy.toLowerCase().includes(firstWord(drug))).map(({ drug }) => ({ drug, allergy })))
}

/** The name of a drug without its strength; words too short to mean a drug are none. */
function firstWord(drug: string): string {
  const [word = ''] = drug.toLowerCase().split(/[\s,]/)
  return word.length >= 5 ? word : ''
}
