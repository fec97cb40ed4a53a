/** Below this length insertion is faster than merging. */
const RUN = 24

function insertionSort(values: Float64Array, start: number, end: number): void {
  for (let i = start + 1; i < end; i++) {
    const value = values[i]!
    let j = i
    for (; j > start && values[j - 1]! > value; j--) values[j] = values[j - 1]!
    values[j] = value
  }
}

/** Merges the ordered stretches [start, middle) and [middle, end), the first of them moved aside to scratch. */
function merge(values: Float64Array, start: number, middle: number, end: number, scratch: Float64Array): void {
  const length = middle - start
  for (let i = 0; i < length; i++) scratch[i] = values[start + i]!
  let left = 0
  let right = middle
  for (let to = start; left < length; to++) {
    if (right < end && values[right]! < scratch[left]!) values[to] = values[right++]!
    else values[to] = scratch[left++]!
  }
}

/**
 * Sorts values[start, end) in place without allocating (the built-in sort needs a view of the stretch).
 *
 * @param values no NaN among them.
 * @param scratch room for half of the stretch, rounded up to a run of 24; its content is lost.
 */
export function sortAscending(values: Float64Array, start: number, end: number, scratch: Float64Array): void {
  for (let run = start; run < end; run += RUN) insertionSort(values, run, Math.min(run + RUN, end))
  for (let width = RUN; width < end - start; width *= 2) {
    for (let left = start; left + width < end; left += 2 * width) {
      const middle = left + width
      if (values[middle]! < values[middle - 1]!) merge(values, left, middle, Math.min(middle + width, end), scratch)
    }
  }
}
