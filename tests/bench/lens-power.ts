import { performance } from 'node:perf_hooks'
import { secondCheck } from '#shared/domain/biometry/lens-power/second-check'
import type { SecondCheckInput } from '#shared/domain/biometry/lens-power/second-check'

/** A patient's two eyes, of ordinary spread, so that no run of equal inputs lets the engine skip work. */
function inputs(): [SecondCheckInput, SecondCheckInput][] {
  return Array.from({ length: 512 }, (_, index) => {
    const plan = (eye: 'right' | 'left', shift: number): SecondCheckInput => ({
      biometry: {
        eye, axialLengthMm: 22 + (index % 64) / 16 + shift, axialLengthSdMm: 0.02, k1D: 42 + (index % 16) / 8, k1AxisDegrees: 8,
        k2D: 43 + (index % 24) / 12, k2AxisDegrees: 98, anteriorChamberDepthMm: 2.8 + (index % 10) / 10, lensThicknessMm: 4.5, whiteToWhiteMm: 11.9,
      },
      constants: { aConstant: 118.7, surgeonFactorMm: 1.62, personalAcdMm: 5.37, haigis: { a0Mm: -0.769, a1: 0.234, a2: 0.217 } },
      powerD: 28 - (index % 64) / 4, targetD: -0.25, limitD: 0.5,
    })
    return [plan('right', 0), plan('left', 0.11)]
  })
}

/** Second checks of both eyes with all four formulas, on one core. One unit of `perSecond` is one patient: eight predictions. */
export async function benchLensPower(): Promise<{ name: string, perSecond: number, goal: number }> {
  const pairs = inputs()
  const count = 200_000
  let kept = 0
  const run = (rounds: number) => {
    for (let round = 0; round < rounds; round++) {
      const [right, left] = pairs[round % pairs.length]!
      kept += secondCheck(right).spreadD + secondCheck(left).spreadD
    }
  }
  run(20_000)
  const rates: number[] = []
  for (let repeat = 0; repeat < 3; repeat++) {
    const started = performance.now()
    run(count)
    rates.push(count / (performance.now() - started) * 1000)
  }
  if (!Number.isFinite(kept)) throw new Error('the bench computed something that is not a number')
  return { name: 'second check, four formulas, both eyes', perSecond: Math.round(rates.sort((a, b) => a - b)[1]!), goal: 100_000 }
}

if (process.argv[1]?.endsWith('lens-power.ts')) console.log(JSON.stringify(await benchLensPower()))
