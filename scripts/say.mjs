// @ts-check

/**
 * Says on standard error what is happening, so that standard output carries results alone.
 *
 * @param {string} sentence
 */
export function say(sentence) {
  process.stderr.write(`${sentence}\n`)
}

/** Something that a person can put right: its message is all that is shown. */
export class Refusal extends Error {}

/** The person asked for an end (Ctrl-C, SIGTERM) while work was going on. */
export class Stopped extends Error {}

/**
 * Runs an entry script. The first Ctrl-C or SIGTERM aborts the signal that it hands on; later ones change
 * nothing, because npm passes on what the terminal has already sent.
 *
 * @param {(signal: AbortSignal) => Promise<number>} work answers the exit code.
 */
export async function main(work) {
  const stopping = new AbortController()
  for (const name of /** @type {const} */ (['SIGINT', 'SIGTERM', 'SIGHUP'])) {
    process.on(name, () => stopping.abort(new Stopped('Stopped.')))
  }
  for (const stream of [process.stdout, process.stderr]) stream.on('error', () => {}) // a closed terminal must not keep us from stopping
  try {
    process.exit(await work(stopping.signal))
  }
  catch (error) {
    if (error instanceof Stopped || error instanceof Refusal) say(error.message)
    else console.error(error)
    process.exit(error instanceof Stopped ? 130 : 1)
  }
}
