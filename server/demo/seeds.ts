/** Drawn once so that each of the twelve verdicts stands clear of its limit; a test holds the margins. */
export const LARKMOOR_SEED = 20_260_314
export const THORNEY_SEED = 20_260_915
