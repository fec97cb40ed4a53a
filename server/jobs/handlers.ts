import { config } from '../config'
import type { Database } from '../database/client'
import { composeMail } from '../mail/compose'
import { sendMail } from '../mail/send'
import { readMemoKeys } from '../memo/keys'
import { makeMemoFile } from '../services/memoFiles'
import { runCheck } from '../services/checks'
import type { RunJudge } from '../workers/judge'
import type { Jobs, Queue } from './queues'

export type Handlers = { readonly [Q in Queue]: (data: Jobs[Q]) => Promise<void> }

async function deliver(db: Database, job: Jobs['mail']): Promise<void> {
  const { origin, smtpUrl, mailFrom, secrets: { authSecret } } = config()
  const mail = await composeMail(db, job, { origin, authSecret })
  if (mail) await sendMail(mail, { smtpUrl, from: mailFrom })
}

/** What each queue's jobs do; every one may be run twice. */
export const handlers = (db: Database, judge: RunJudge): Handlers => ({
  check: address => runCheck(db, address, judge),
  memo: address => makeMemoFile(db, address, () => readMemoKeys(config().keysDir)),
  mail: job => deliver(db, job),
})
