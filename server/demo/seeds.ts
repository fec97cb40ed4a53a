/** Drawn once so that each of the twelve verdicts stands clear of its limit; a test holds the margins. */
export const LARKMOOR_SEED = 58
export const THORNEY_SEED = 1
