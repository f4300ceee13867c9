import { clockTime, constraints, fits, travelMinutes } from '#shared/domain/visit/booking-constraints'
import type { BookingNeed, BookingPlace, SiteDistances, Surroundings } from '#shared/domain/visit/booking-constraints'

export interface BookingProposal {
  pathwayId: string
  placeId: string
  siteId: string
  startsAt: Date
  why: string
  /** Up to three other free places that suit, soonest first. */
  otherPlaceIds: string[]
}
export interface UnplacedNeed { pathwayId: string, why: string, waysOut: string[] }
export interface BookingPlan { proposals: BookingProposal[], unplaced: UnplacedNeed[] }
export interface BookingRequest { needs: readonly BookingNeed[], places: readonly BookingPlace[], siteDistances: SiteDistances, now: Date }

const mostOthers = 3
/** Two eyes of one patient are seen within this of each other. 'proposed'. */
const fellowApartMinutes = 60

/**
 * Proposes one place for each need; books nothing. Required checks come first, then the order of the list. A need that finds its places
 * taken may move one placed before it to another place that suits that one too, so that as many as possible are seen and nobody who
 * has a place loses it. Two eyes of one patient are placed together before all others, or left for a person to decide. The same
 * request always gives the same plan.
 */
export function proposeBookings(request: BookingRequest): BookingPlan {
  const around: Surroundings = { siteDistances: request.siteDistances, now: request.now }
  const candidates = new Map(request.needs.map(need => [need.pathwayId, candidatesOf(need, request.places, around)]))
  const holder = new Map<string, BookingNeed>()
  const pinned = new Set<string>()
  const pairs = pairsOf(request.needs)
  for (const pair of pairs) pinPair(pair, candidates, holder, pinned)

  const paired = new Set(pairs.flat().map(need => need.pathwayId))
  const singles = request.needs.filter(need => !paired.has(need.pathwayId))
  for (const need of [...singles.filter(each => each.isRequired), ...singles.filter(each => !each.isRequired)]) settle(need, candidates, holder, pinned, new Set())

  const placeOf = new Map([...holder].map(([placeId, need]) => [need.pathwayId, placeId]))
  const proposals: BookingProposal[] = []
  const unplaced: UnplacedNeed[] = []
  for (const need of request.needs) {
    const place = request.places.find(each => each.placeId === placeOf.get(need.pathwayId))
    if (!place) unplaced.push(unplacedOf(need, request.places, candidates.get(need.pathwayId) ?? [], holder, around, paired.has(need.pathwayId)))
    else {
      const suiting = candidates.get(need.pathwayId) ?? []
      const others = suiting.filter(each => !holder.has(each.placeId)).sort((left, right) => left.startsAt.getTime() - right.startsAt.getTime()).slice(0, mostOthers)
      proposals.push({ pathwayId: need.pathwayId, placeId: place.placeId, siteId: place.siteId, startsAt: place.startsAt, why: whyHere(need, place, suiting, request.siteDistances), otherPlaceIds: others.map(each => each.placeId) })
    }
  }
  return { proposals, unplaced }
}

/** Places that suit a need, best first: nearest site, then soonest, then by id so that ties are settled the same way each time. */
function candidatesOf(need: BookingNeed, places: readonly BookingPlace[], around: Surroundings): BookingPlace[] {
  const travel = (place: BookingPlace) => travelMinutes(need, place, around.siteDistances) ?? Number.POSITIVE_INFINITY
  return places.filter(place => fits(need, place, around))
    .sort((left, right) => travel(left) - travel(right) || left.startsAt.getTime() - right.startsAt.getTime() || (left.placeId < right.placeId ? -1 : 1))
}

/** Pathways of one patient on the same list, two by two. */
function pairsOf(needs: readonly BookingNeed[]): [BookingNeed, BookingNeed][] {
  const pairs: [BookingNeed, BookingNeed][] = []
  needs.forEach((first, index) => {
    const second = needs.slice(index + 1).find(each => each.patientId === first.patientId)
    if (second && !pairs.flat().includes(first)) pairs.push([first, second])
  })
  return pairs
}

function pinPair([first, second]: [BookingNeed, BookingNeed], candidates: Map<string, BookingPlace[]>, holder: Map<string, BookingNeed>, pinned: Set<string>): void {
  for (const one of candidates.get(first.pathwayId) ?? []) {
    if (holder.has(one.placeId)) continue
    const apart = (other: BookingPlace) => Math.abs(other.startsAt.getTime() - one.startsAt.getTime()) / 60_000
    const other = (candidates.get(second.pathwayId) ?? [])
      .filter(each => each.placeId !== one.placeId && !holder.has(each.placeId) && each.siteId === one.siteId && apart(each) <= fellowApartMinutes)
      .sort((left, right) => apart(left) - apart(right) || (left.placeId < right.placeId ? -1 : 1))[0]
    if (!other) continue
    holder.set(one.placeId, first).set(other.placeId, second)
    pinned.add(one.placeId).add(other.placeId)
    return
  }
}

/** Gives a need its best free place, or frees one by settling its holder elsewhere (an augmenting path). */
function settle(need: BookingNeed, candidates: Map<string, BookingPlace[]>, holder: Map<string, BookingNeed>, pinned: Set<string>, tried: Set<string>): boolean {
  const suiting = candidates.get(need.pathwayId) ?? []
  const free = suiting.find(place => !holder.has(place.placeId))
  if (free) {
    holder.set(free.placeId, need)
    return true
  }
  for (const place of suiting) {
    const before = holder.get(place.placeId)
    if (!before || pinned.has(place.placeId) || tried.has(place.placeId)) continue
    tried.add(place.placeId)
    if (!settle(before, candidates, holder, pinned, tried)) continue
    holder.set(place.placeId, need)
    return true
  }
  return false
}

function whyHere(need: BookingNeed, place: BookingPlace, suiting: readonly BookingPlace[], distances: SiteDistances): string {
  const lines: string[] = []
  if (need.because) lines.push(need.because)
  const bounds = [need.inPerson && need.isRequired && 'in person', need.atHospital && 'at the hospital', need.beforeNoon && 'before noon'].filter(each => typeof each === 'string')
  if (bounds.length) lines.push(sentence(bounds.join(', ')))
  if (need.transport) lines.push(need.transport === 'to-arrange' ? 'Transport must still be booked.' : `Transport arrives ${clockTime(need.transport.arrivesAt, place.zone)}.`)
  if (need.interpreter) lines.push(need.interpreter.from ? `Interpreter (${need.interpreter.language}) from ${clockTime(need.interpreter.from, place.zone)}.` : `Interpreter (${need.interpreter.language}) must still be booked.`)
  if (need.notBefore) lines.push(`Cannot come before ${clockTime(need.notBefore, place.zone)}.`)
  if (need.notAfter) lines.push(`Must have begun by ${clockTime(need.notAfter, place.zone)}.`)
  if (need.fellowVisit) lines.push('Same day as the fellow eye.')
  const minutes = travelMinutes(need, place, distances) ?? 0
  if (minutes > 0) lines.push(`${place.siteName} is ${minutes} minutes away.`)
  if (lines.length === 0) lines.push('Nothing special.')
  lines.push(suiting[0] === place ? 'First place that suits.' : 'Earlier places are left for others.')
  return lines.join(' ')
}

function unplacedOf(need: BookingNeed, places: readonly BookingPlace[], suiting: readonly BookingPlace[], holder: Map<string, BookingNeed>, around: Surroundings, isPaired: boolean): UnplacedNeed {
  const lastWay = need.isRequired ? 'Ask the surgeon to decide on another kind of check' : 'Record another kind of check'
  const answer = (why: string, ways: string[]): UnplacedNeed => ({ pathwayId: need.pathwayId, why, waysOut: [...ways, lastWay] })
  if (places.length === 0) return answer('There is no free place at all.', ['Open a place'])
  if (isPaired && suiting.length > 0) return answer('No two places for both eyes are free close together.', ['Open a place beside a free one', 'Book each eye by hand'])
  if (suiting.length > 0) return answer(`Every place that suits is taken: ${suiting.length === 1 ? 'there was one' : `there were ${suiting.length}`}.`, ['Open another place', 'Change one of the other rows'])
  const free = [...places].filter(place => !holder.has(place.placeId)).sort((left, right) => left.startsAt.getTime() - right.startsAt.getTime())
  const zone = places[0]!.zone
  const alone = constraints.flatMap((each) => {
    const place = free.find(one => fits(need, one, around, each.id))
    return place ? [{ words: each.words(need, zone), way: each.wayOut(need, place) }] : []
  })
  if (alone.length === 0) return answer('No free place meets all that is needed at once.', ['Open a place'])
  return answer(alone.map(each => each.words).join(' '), alone.map(each => each.way))
}

function sentence(words: string): string {
  return `${words.charAt(0).toUpperCase()}${words.slice(1)}.`
}
