import { EventEmitter } from 'node:events'
import type { ListenMeta } from 'postgres'
import { database } from './database/client'
import { log, errorFacts } from './log'
import { NOTICE_CHANNEL, type Notice } from './services/notices'

/**
 * One LISTEN connection per web process, fanned out in memory to every open event stream. postgres.js connects
 * again by itself; streams are then told to read anew, since notices of the meantime are lost.
 */
const notices = new EventEmitter().setMaxListeners(0)
let listening: Promise<ListenMeta> | null = null

function begin(): Promise<ListenMeta> {
  let lost = false
  return database().$client.listen(NOTICE_CHANNEL, payload => notices.emit('notice', JSON.parse(payload) as Notice), () => {
    if (lost) notices.emit('reconnected')
    lost = true
  })
}

export interface StudyListener {
  readonly onNotice: (notice: Notice) => void
  readonly onReconnected: () => void
}

/** Hears what changes in one study until the returned function is called. */
export function listenToStudy(studyId: string, { onNotice, onReconnected }: StudyListener): () => void {
  listening ??= begin().catch((error: unknown) => {
    listening = null
    log.error(errorFacts(error))
    throw error
  })
  void listening.catch(() => undefined)
  const hear = (notice: Notice) => {
    if (notice.studyId === studyId) onNotice(notice)
  }
  notices.on('notice', hear)
  notices.on('reconnected', onReconnected)
  return () => {
    notices.off('notice', hear)
    notices.off('reconnected', onReconnected)
  }
}
