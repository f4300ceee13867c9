import { cellGrades, flareGrades, oedemaGrades, type CellGrade, type FlareGrade, type OedemaGrade } from '#shared/domain/review/vocabulary'

export type GradeScaleKind = 'cells' | 'flare' | 'oedema'
export interface GradeOption { value: CellGrade | FlareGrade | OedemaGrade, key: string, definition: string }

/** Anterior chamber cells in a 1 mm beam and flare: Standardization of Uveitis Nomenclature working group, Am J Ophthalmol 2005;140:509-516. */
const cellDefinitions = ['Fewer than 1 cell in a 1 mm beam', '1 to 5 cells', '6 to 15 cells', '16 to 25 cells', '26 to 50 cells', 'More than 50 cells']
const flareDefinitions = ['None', 'Faint, just seen', 'Moderate, iris and lens clear', 'Marked, iris and lens hazy', 'Intense, fibrin present']
/** Common practice: five steps by how much of the iris can be seen. */
const oedemaDefinitions = ['Clear', 'Faint haze, iris detail sharp', 'Folds, iris detail soft', 'Dense, only pupil edge seen', 'Opaque, no view in']

/** The key that chooses a grade while its scale has focus: its first digit, and `5` for 0.5+. */
function keyOf(grade: string | number): string {
  return grade === '0.5+' ? '5' : String(grade).charAt(0)
}

function options<T extends CellGrade | FlareGrade | OedemaGrade>(grades: readonly T[], definitions: string[]): GradeOption[] {
  return grades.map((value, index) => ({ value, key: keyOf(value), definition: definitions[index]! }))
}

export const gradeOptions: Record<GradeScaleKind, GradeOption[]> = {
  cells: options(cellGrades, cellDefinitions),
  flare: options(flareGrades, flareDefinitions),
  oedema: options(oedemaGrades, oedemaDefinitions),
}
