import { z } from 'zod'
import { STUDY_ROLES } from '../access/actions'
import { STUDY_PHASES } from '../schemas/study'
import { lineText } from '../schemas/text'
import { defineOperation } from './operation'
import { EXAMPLE, momentText, studyParams, uuid } from './parts'

export const studyView = z.strictObject({
  id: uuid,
  protocolNumber: z.string(),
  title: z.string(),
  phase: z.enum(STUDY_PHASES),
  sponsor: z.string(),
  /** Invented content, marked on every page. */
  demo: z.boolean(),
  createdAt: momentText,
  /** Counts as blinded until a signed plan says open-label. */
  blinded: z.boolean(),
  blindBrokenAt: momentText.nullable(),
})
export type StudyView = z.infer<typeof studyView>

/** Every study for an administrator, for everybody else those in which they hold a role. */
export const listStudiesOperation = defineOperation({
  id: 'studies.list', method: 'GET', path: '/api/studies', action: 'own.read', scope: 'installation',
  params: null, query: null, body: null,
  answer: z.strictObject({ studies: z.array(studyView.extend({ roles: z.array(z.enum(STUDY_ROLES)) })) }), errors: [], example: {},
})

export const createStudyOperation = defineOperation({
  id: 'studies.create', method: 'POST', path: '/api/studies', action: 'studies.create', scope: 'installation',
  params: null, query: null,
  body: z.strictObject({ protocolNumber: lineText(40), title: lineText(300), phase: z.enum(STUDY_PHASES), sponsor: lineText(120) }),
  answer: studyView, errors: ['already-done'],
  example: { body: { protocolNumber: 'LRK-201', title: 'A dose-finding study', phase: '2', sponsor: 'Larkmoor Therapeutics' } },
})

export const readStudyOperation = defineOperation({
  id: 'studies.read', method: 'GET', path: '/api/studies/[studyId]', action: 'study.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: studyView, errors: [], example: { params: { studyId: EXAMPLE.id } },
})
