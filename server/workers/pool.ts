import Piscina from 'piscina'
import judgeThread from './judge?thread'
import type { JudgeResult, JudgeTask, RunJudge } from './judge'

/** Threads for the judge's arithmetic, so that the worker goes on answering its queue and its signals. */
export function judgePool(threads: number): { judge: RunJudge, close: () => Promise<void> } {
  const pool = new Piscina<JudgeTask, JudgeResult>({ filename: judgeThread, maxThreads: threads, minThreads: 0, idleTimeout: 30_000 })
  return { judge: task => pool.run(task), close: () => pool.destroy() }
}
