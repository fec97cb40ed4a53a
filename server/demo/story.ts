import type { Database } from '../database/client'
import { LARKMOOR_CUTS, larkmoorFiles } from './larkmoorData'
import { larkmoorPlan } from './larkmoorPlan'
import { CAST, makePeople, type DemoPeople } from './people'
import { LARKMOOR_SEED, THORNEY_SEED } from './seeds'
import { seededSource } from './source'
import { acknowledgeBy, bringIn, clearNoor, judgeNow, lock, openStudy, registerPlan, releaseVerdicts, sealAllocation, settleAndSign } from './steps'
import { THORNEY_CUT, thorneyFile } from './thorneyData'
import { thorneyPlan } from './thorneyPlan'

const SPONSOR = 'Larkmoor Therapeutics'

/** The blinded study: two looks, a database lock, and what follows from them. */
async function tellLarkmoor(db: Database, people: DemoPeople): Promise<void> {
  const stage = await openStudy(db, people, { protocolNumber: 'LARKMOOR-204', title: 'Vellorane in adults with chronic refractory cough', phase: '2', sponsor: SPONSOR })
  await registerPlan(stage, larkmoorPlan(CAST.tomas.email))
  await clearNoor(stage)
  const { extracts, allocation } = larkmoorFiles(seededSource(LARKMOOR_SEED))
  const [first, second, last] = LARKMOOR_CUTS.map((cut, index) => ({ ...cut, content: extracts[index]! }))

  const look1 = await bringIn(stage, first!)
  await sealAllocation(stage, allocation)
  await judgeNow(stage, look1)
  await releaseVerdicts(stage, look1)

  await releaseVerdicts(stage, await bringIn(stage, second!))
  await acknowledgeBy(stage, 'CRP-ALL', null)
  await acknowledgeBy(stage, 'RESCUE-LOW', 'Please tell me before the report is written which analysis it will carry.')

  const locked = await bringIn(stage, last!)
  await lock(stage, locked)
  await releaseVerdicts(stage, locked)
  await settleAndSign(stage, 'CRP-ALL', 'The registered step for skewed residuals applies; it was reviewed and signed with the plan.')
}

/** The open-label study: from file to verdict without a release. */
async function tellThorney(db: Database, people: DemoPeople): Promise<void> {
  const stage = await openStudy(db, people, { protocolNumber: 'THORNEY-118', title: 'Supervised walking after hip fracture', phase: 'not-applicable', sponsor: SPONSOR })
  await registerPlan(stage, thorneyPlan(CAST.tomas.email))
  await bringIn(stage, { ...THORNEY_CUT, content: thorneyFile(seededSource(THORNEY_SEED)) })
}

/** Fills an empty database with the demo, told by the application's own services. */
export async function tellStory(db: Database): Promise<DemoPeople> {
  const people = await makePeople(db)
  await tellLarkmoor(db, people)
  await tellThorney(db, people)
  return people
}
