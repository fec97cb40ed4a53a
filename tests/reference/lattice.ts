/**
 * Samples of any size by whole-number and rational arithmetic alone, so that R, Python and this code build the
 * same doubles; scripts/reference/common.R builds them too.
 */
const uniform = (n: number, multiplier: number) =>
  Array.from({ length: n }, (_, index) => (((index + 1) * multiplier) % 10007 + 0.5) / 10007)

const LATTICE: Readonly<Record<string, (n: number) => number[]>> = {
  uniform: n => uniform(n, 3571),
  skewed: n => uniform(n, 4241).map(u => u / (1.02 - u)),
  heavy: n => uniform(n, 2609).map((u) => {
    const t = 2 * u - 1
    return t / (1.01 - t * t)
  }),
  bell: n => [4241, 2609, 5003, 1999, 6151].reduce(
    (total, multiplier) => uniform(n, multiplier).map((u, index) => total[index]! + u),
    uniform(n, 3571),
  ),
  coarse: n => uniform(n, 5003).map(u => Math.floor(12 * u)),
}

/** The lattice sample of a shape that a fixture names. */
export function lattice(shape: string, n: number): number[] {
  const build = LATTICE[shape]
  if (!build) throw new Error(`no lattice ${shape}`)
  return build(n)
}
