/** Beyond these sizes the fourth power of a deviation may overflow or vanish. */
const LARGE = 1e70
const SMALL = 1e-70

/** Divisor for deviations before they are raised to a power: 1 at ordinary sizes, else the largest of them. */
export function powerScale(largest: number): number {
  return largest > LARGE || largest < SMALL ? largest : 1
}
