import { createPlanOperation, savePlanOperation, signPlanAsAuthorOperation } from '#shared/contract/plans'
import { readStudyOperation } from '#shared/contract/studies'
import type { SignedInAccount } from './server'
import { trialPlan } from './trial'

interface Registering { readonly studyId: string, readonly as: { readonly biostatistician: SignedInAccount } }

/** Writes, saves and signs the trial's plan by the interface. */
export async function registerPlan({ studyId, as: { biostatistician: { client, email, password } } }: Registering): Promise<{ planId: string, protocolNumber: string }> {
  const params = { studyId }
  const { protocolNumber } = await client.call(readStudyOperation, { params })
  const { id, revision } = await client.call(createPlanOperation, { params, body: { amendmentReason: null } })
  const at = { studyId, planId: id }
  const saved = await client.call(savePlanOperation, { params: at, revision, body: { document: trialPlan(protocolNumber) } })
  await client.call(signPlanAsAuthorOperation, {
    params: at, revision: saved.revision, body: { identifier: email, password, declaration: { firstSubjectIn: null, dataSeen: 'none' } },
  })
  return { planId: id, protocolNumber }
}
