import { availableParallelism } from 'node:os'
import PgBoss from 'pg-boss'
import { config } from '../config'
import { closeDatabase, database } from '../database/client'
import { handlers } from '../jobs/handlers'
import { QUEUES, type Jobs, type Queue } from '../jobs/queues'
import { errorFacts, log } from '../log'
import { sweepBlobs } from '../services/blobs'
import { judgePool } from './pool'

/** The worker process: takes jobs until it is told to stop. Any number of them may run. */
const SWEEP_EVERY = 60 * 60 * 1000
const POLL_SECONDS = 1

const boss = new PgBoss({ connectionString: config().databaseUrl, migrate: false, max: 4 })
boss.on('error', error => log.error(errorFacts(error)))

const pool = judgePool(Math.max(1, availableParallelism() - 1))
const handle = handlers(database(), pool.judge)

async function work<Q extends Queue>(queue: Q): Promise<void> {
  await boss.work<Jobs[Q]>(queue, { pollingIntervalSeconds: POLL_SECONDS, batchSize: 1 }, async (jobs) => {
    for (const job of jobs) {
      const started = performance.now()
      try {
        await handle[queue](job.data)
        log.info({ queue, job: job.id, ms: Math.round(performance.now() - started) })
      }
      catch (error) {
        log.error({ queue, job: job.id, ...errorFacts(error) })
        throw error
      }
    }
  })
}

const sweep = () => sweepBlobs(database()).catch((error: unknown) => log.error(errorFacts(error)))
const sweeping = setInterval(() => void sweep(), SWEEP_EVERY)

async function stop(): Promise<void> {
  clearInterval(sweeping)
  await boss.stop({ graceful: true, timeout: 10_000 })
  await pool.close()
  await closeDatabase()
  process.exit(0)
}
process.once('SIGTERM', () => void stop())
process.once('SIGINT', () => void stop())

await boss.start()
await Promise.all((Object.keys(QUEUES) as Queue[]).map(queue => work(queue)))
log.info({ worker: 'ready' })
