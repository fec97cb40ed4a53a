import type { SampleProblem } from './types'

/** A procedure was asked of data for which it is undefined. The message is the code; wording belongs elsewhere. */
export class InvalidSampleError extends Error {
  override readonly name = 'InvalidSampleError'

  constructor(readonly code: SampleProblem) {
    super(code)
  }
}

/** Turns what a kernel refused into the error of the public function. */
export function raise(problem: SampleProblem | null): void {
  if (problem !== null) throw new InvalidSampleError(problem)
}
