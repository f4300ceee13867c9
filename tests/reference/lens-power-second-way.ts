/**
 * The four formulas written a second time, in the closed algebraic form of the SRK/T paper (X and Y brackets) and in
 * metres, without any code of the product; and a physical eye traced surface by surface. Tests hold the product to these.
 */
export interface PlainEye { al: number, k1: number, k2: number, acd: number }
export interface PlainConstants { a: number, sf: number, pacd: number, a0: number, a1: number, a2: number }

interface Closed { /** corneal index less one, times 1000 */ nc: number, r: number, length: number, depth: number }

/** Power for a spectacle refraction: 1336 (X - .001 R (12 X + L r)) / ((L - C)(Y - .001 R (12 Y + C r))). */
function closedPower({ nc, r, length, depth }: Closed, refraction: number): number {
  const x = 1.336 * r - nc / 1000 * length
  const y = 1.336 * r - nc / 1000 * depth
  return 1336 * (x - 0.001 * refraction * (12 * x + length * r)) / ((length - depth) * (y - 0.001 * refraction * (12 * y + depth * r)))
}

function closedRefraction({ nc, r, length, depth }: Closed, power: number): number {
  const x = 1.336 * r - nc / 1000 * length
  const y = 1.336 * r - nc / 1000 * depth
  return (1336 * x - power * (length - depth) * y) / (1.336 * (12 * x + length * r) - 0.001 * power * (length - depth) * (12 * y + depth * r))
}

const sagitta = (r: number, chord: number) => r - Math.sqrt(r * r - chord * chord / 4)

function closedEye(formula: string, eye: PlainEye, c: PlainConstants): Closed {
  const k = 0.5 * eye.k1 + 0.5 * eye.k2
  const r = 1000 * (1.3375 - 1) / k
  if (formula === 'srk-t') {
    const corrected = eye.al > 24.2 ? eye.al * (1.716 - 0.0237 * eye.al) - 3.446 : eye.al
    const offset = 0.62467 * c.a - (68.747 + 3.336)
    return { nc: 333, r, length: 0.97971 * eye.al + 0.65696, depth: offset + sagitta(r, 0.58412 * corrected + 0.098 * k - 5.41) }
  }
  if (formula === 'holladay-1') {
    const chord = Math.min(13.5, eye.al / 1.876)
    return { nc: 1000 / 3, r, length: eye.al + 0.2, depth: 0.56 + sagitta(Math.max(7, r), chord) + c.sf }
  }
  if (formula === 'hoffer-q') {
    const short = eye.al <= 23
    const turn = Math.PI / 180
    const end = 0.1 * (short ? 1 : -1) * (23.5 - eye.al) ** 2 * Math.tan(turn * 0.1 * ((short ? 28 : 23.5) - eye.al) ** 2)
    return { nc: 337.5, r, length: eye.al, depth: c.pacd - 0.94166 + 0.3 * eye.al - 7.05 + Math.sin(turn * k) ** 2 / Math.cos(turn * k) ** 2 + end }
  }
  const meanRadius = 168.75 / eye.k1 + 168.75 / eye.k2
  return { nc: 331.5, r: meanRadius, length: eye.al, depth: c.a0 + c.a1 * eye.acd + c.a2 * eye.al }
}

export const secondWayPower = (formula: string, eye: PlainEye, c: PlainConstants, refraction: number) => closedPower(closedEye(formula, eye, c), refraction)
export const secondWayRefraction = (formula: string, eye: PlainEye, c: PlainConstants, power: number) => closedRefraction(closedEye(formula, eye, c), power)

type Matrix = [number, number, number, number]
const times = ([a, b, c, d]: Matrix, [e, f, g, h]: Matrix): Matrix => [a * e + b * g, a * f + b * h, c * e + d * g, c * f + d * h]
const refracts = (powerD: number): Matrix => [1, 0, -powerD, 1]
const travels = (mm: number, index: number): Matrix => [1, mm / 1000 / index, 0, 1]

export interface PhysicalEye extends PlainEye { lensThickness: number }

/**
 * Spectacle refraction of a physical pseudophakic eye by paraxial ray transfer matrices: both corneal surfaces (rear
 * radius 0.84 of the front, 0.54 mm thick, 1.376), aqueous 1.336, and a thick biconvex lens (1.47, thicker as it is
 * stronger) whose middle lies at chamber depth + 0.38 of the old lens's thickness (the C constant: Olsen T, Hoffmann P,
 * J Cataract Refract Surg 2014;40:764-773, from memory). No regression formula and no A constant takes part.
 */
export function tracedRefraction(eye: PhysicalEye, lensPowerD: number): number {
  const front = 337.5 / (0.5 * eye.k1 + 0.5 * eye.k2)
  const rear = 0.84 * front
  const thick = 0.54
  const lensThick = 0.35 + 0.02 * Math.abs(lensPowerD)
  const middle = eye.acd + 0.38 * eye.lensThickness
  // Equal surfaces whose thick-lens power is the labelled one: P = 2 s - s² t / n, solved for s.
  const reduced = lensThick / 1000 / 1.47
  const surface = (1 - Math.sqrt(1 - lensPowerD * reduced)) / reduced
  const retina = eye.al - middle - lensThick / 2
  const steps: Matrix[] = [
    refracts(376 / front), travels(thick, 1.376), refracts(-40 / rear), travels(middle - lensThick / 2 - thick, 1.336),
    refracts(surface), travels(lensThick, 1.47), refracts(surface), travels(retina, 1.336),
  ]
  const [a, b] = steps.reduce((before, step) => times(step, before), [1, 0, 0, 1] as Matrix)
  // A ray of vergence X at the cornea (height 1, reduced slope X with this sign: converging slopes are negative) must meet the retina at height 0.
  const atCornea = a / b
  return atCornea / (1 + 0.012 * atCornea)
}
