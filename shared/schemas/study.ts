export const STUDY_PHASES = ['1', '1-2', '2', '2-3', '3', '4', 'not-applicable'] as const
export type StudyPhase = typeof STUDY_PHASES[number]
