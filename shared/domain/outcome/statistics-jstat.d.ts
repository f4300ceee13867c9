/** The parts of jstat that are used here; the package brings no types of its own. */
declare module 'jstat' {
  interface Continuous2 {
    cdf: (x: number, first: number, second: number) => number
    inv: (probability: number, first: number, second: number) => number
  }
  const jStat: {
    normal: Continuous2
    beta: Continuous2
    binomial: { cdf: (count: number, trials: number, probability: number) => number }
  }
  export default jStat
}
