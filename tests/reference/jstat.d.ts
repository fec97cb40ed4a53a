/** What the second route uses of jstat, which brings no types. */
declare module 'jstat' {
  interface Distribution {
    cdf: (x: number, ...parameters: number[]) => number
    inv: (p: number, ...parameters: number[]) => number
  }
  const jStat: {
    normal: Distribution
    studentt: Distribution
    centralF: Distribution
    /** g1 and g2, with divisor n. */
    skewness: (values: number[]) => number
    kurtosis: (values: number[]) => number
  }
  export default { jStat }
}
