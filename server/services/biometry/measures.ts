import type { biometries } from '#server/db/schema/index'
import type { EyeMeasures } from '#shared/contracts/biometry'
import type { EyeBiometry } from '#shared/domain/biometry/vocabulary'
import type { Eye } from '#shared/domain/pathway/vocabulary'

type Row = typeof biometries.$inferSelect
const known = (value: number | null) => value ?? undefined

/** A stored set of measurements as the rules and formulas read it. */
export function measuresOf(row: Row): EyeMeasures {
  return {
    axialLengthMm: row.axialLengthMm, axialLengthSdMm: known(row.axialLengthSdMm), k1D: row.k1D, k1AxisDegrees: row.k1AxisDegrees, k2D: row.k2D, k2AxisDegrees: row.k2AxisDegrees,
    anteriorChamberDepthMm: known(row.anteriorChamberDepthMm), lensThicknessMm: known(row.lensThicknessMm), whiteToWhiteMm: known(row.whiteToWhiteMm),
  }
}

export const biometryOf = (eye: Eye, measures: EyeMeasures): EyeBiometry => ({ eye, ...measures })

/** Columns of the measurements; what was not measured is written as null, so that a repeat does not inherit it. */
export function measureColumns(given: EyeMeasures) {
  return {
    axialLengthMm: given.axialLengthMm, axialLengthSdMm: given.axialLengthSdMm ?? null, k1D: given.k1D, k1AxisDegrees: given.k1AxisDegrees, k2D: given.k2D, k2AxisDegrees: given.k2AxisDegrees,
    anteriorChamberDepthMm: given.anteriorChamberDepthMm ?? null, lensThicknessMm: given.lensThicknessMm ?? null, whiteToWhiteMm: given.whiteToWhiteMm ?? null,
  }
}
