// @ts-check
// Loaded before a server program: ends it when the script that started it is gone without having stopped it.
import { isMainThread } from 'node:worker_threads'

if (isMainThread && process.channel) {
  process.on('disconnect', () => process.kill(process.pid, 'SIGTERM'))
  process.channel.unref()
}
