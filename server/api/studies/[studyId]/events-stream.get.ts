import { createEventStream } from 'h3'
import { streamStudyOperation } from '#shared/contract/record'
import { listenToStudy } from '../../../listening'
import { signedIn } from '../../../utils/signedIn'

const KEEP_ALIVE = 15_000
const RECHECK = 60_000

/** Kinds of changes only. A comment keeps proxies from closing it; the session is looked at again every minute. */
export default defineApiHandler(streamStudyOperation, ({ event, params: { studyId } }) => {
  const stream = createEventStream(event)
  const closeUnlessSignedIn = async () => {
    const session = await signedIn(event).catch(() => null)
    if (!session) await stream.close()
  }
  const tell = (kind: string) => void stream.push({ event: 'change', data: JSON.stringify({ kind }) })
  const stopListening = listenToStudy(studyId, { onNotice: ({ kind }) => tell(kind), onReconnected: () => tell('reconnected') })
  const alive = setInterval(() => void stream.push({ event: 'alive', data: '' }), KEEP_ALIVE)
  const recheck = setInterval(() => void closeUnlessSignedIn(), RECHECK)
  stream.onClosed(() => {
    stopListening()
    clearInterval(alive)
    clearInterval(recheck)
  })
  return stream.send()
})
