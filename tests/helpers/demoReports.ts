import { judge } from '../../shared/decision/judge'
import type { ExtractIdentity, Report } from '../../shared/decision/report'
import type { Plan } from '../../shared/plan/schema'
import { plannedArms, readAllocation } from '../../server/readers/allocationList'
import { proposeMapping, readCsvExtract, readHead } from '../../server/readers/extractFile'
import { LARKMOOR_CUTS, larkmoorFiles } from '../../server/demo/larkmoorData'
import { larkmoorPlan } from '../../server/demo/larkmoorPlan'
import { seededSource } from '../../server/demo/source'
import { THORNEY_CUT, thorneyFile } from '../../server/demo/thorneyData'
import { thorneyPlan } from '../../server/demo/thorneyPlan'

const bytesOf = (text: string) => new TextEncoder().encode(text)

async function* once(bytes: Uint8Array): AsyncGenerator<Uint8Array> {
  yield bytes
}

type Placed = Pick<ExtractIdentity, 'cutOff' | 'purpose' | 'look' | 'standing'>

/** One file through reader and judge, as the worker does it. */
async function reportOf(plan: Plan, file: string, placed: Placed, allocation: string | null): Promise<Report> {
  const bytes = bytesOf(file)
  const head = await readHead(bytes, true)
  const { complete } = proposeMapping(plan, head!, null)
  const { columns, findings } = await readCsvExtract(once(bytes), plan, complete!)
  if (!columns) throw new Error(`refused: ${JSON.stringify(findings.list.slice(0, 3))}`)
  const list = allocation === null ? null : await readAllocation(once(bytesOf(allocation)), plan, ['USUBJID'])
  return judge({
    plan, columns, queries: {},
    extract: { bytesHash: '0'.repeat(64), contentHash: '0'.repeat(64), ...placed },
    allocation: list && { state: 'true', hash: null, subjects: plannedArms(list.subjects) },
  })
}

/** The demo's blinded study at look 1, look 2 and database lock. */
export function larkmoorReports(seed: number): Promise<Report[]> {
  const plan = larkmoorPlan('tomas@larkmoor.example')
  const { extracts, allocation } = larkmoorFiles(seededSource(seed))
  const places: Placed[] = LARKMOOR_CUTS.map(({ cutOff, purpose }, index) => ({
    cutOff, purpose,
    ...(purpose === 'interim' ? { look: plan.looks[index]!.id, standing: 'look' as const } : { look: null, standing: 'decision-point' as const }),
  }))
  return Promise.all(extracts.map((file, index) => reportOf(plan, file, places[index]!, allocation)))
}

/** The open-label study at its look. */
export const thorneyReport = (seed: number): Promise<Report> => reportOf(
  thorneyPlan('tomas@larkmoor.example'), thorneyFile(seededSource(seed)),
  { cutOff: THORNEY_CUT.cutOff, purpose: THORNEY_CUT.purpose, look: 'LOOK1', standing: 'look' }, null,
)
