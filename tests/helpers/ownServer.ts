import { spawn, type ChildProcess } from 'node:child_process'
import { once } from 'node:events'
import { connect, createServer, type AddressInfo, type Server, type Socket } from 'node:net'
import { fileURLToPath } from 'node:url'

const ENTRY = fileURLToPath(new URL('../../.output/server/index.mjs', import.meta.url))

async function listen(server: Server): Promise<number> {
  server.listen(0, '127.0.0.1')
  await once(server, 'listening')
  return (server.address() as AddressInfo).port
}

async function freePort(): Promise<number> {
  const server = createServer()
  const port = await listen(server)
  server.close()
  await once(server, 'close')
  return port
}

/** A way to the database that can be cut and mended, as when it is stopped and started. */
export class Gate {
  readonly #sockets = new Set<Socket>()
  #server: Server | undefined
  #port = 0

  constructor(readonly target: URL) {}

  /** The database's address by way of the gate. */
  get url(): string {
    return Object.assign(new URL(this.target), { host: `127.0.0.1:${this.#port}` }).href
  }

  async open(): Promise<void> {
    const server = createServer((near) => {
      const far = connect(Number(this.target.port), this.target.hostname)
      for (const [socket, other] of [[near, far], [far, near]] as const) {
        this.#sockets.add(socket)
        socket.on('error', () => other.destroy()).on('close', () => other.destroy())
        socket.pipe(other)
      }
    })
    if (this.#port === 0) this.#port = await listen(server)
    else {
      server.listen(this.#port, '127.0.0.1')
      await once(server, 'listening')
    }
    this.#server = server
  }

  async shut(): Promise<void> {
    for (const socket of this.#sockets) socket.destroy()
    this.#sockets.clear()
    this.#server?.close()
    if (this.#server) await once(this.#server, 'close')
  }
}

export interface OwnServer {
  readonly origin: string
  readonly process: ChildProcess
  /** What it has written so far. */
  readonly output: () => string
  readonly stop: () => Promise<void>
}

/** Starts the built web server with entries of its own; resolves when it listens or has ended. */
export async function startServer(environment: Record<string, string>): Promise<OwnServer> {
  const port = await freePort()
  const origin = `http://127.0.0.1:${port}`
  const child = spawn(process.execPath, [ENTRY], {
    env: { ...process.env, NITRO_HOST: '127.0.0.1', NITRO_PORT: String(port), STIPULE_ORIGIN: origin, AUTH_ORIGIN: `${origin}/api/auth`, ...environment },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  let output = ''
  const listening = new Promise<void>((resolve) => {
    const collect = (chunk: Buffer) => {
      output += chunk
      if (output.includes('Listening')) resolve()
    }
    child.stdout.on('data', collect)
    child.stderr.on('data', collect)
    child.on('exit', () => resolve())
  })
  await listening
  return {
    origin, process: child, output: () => output,
    async stop() {
      if (child.exitCode !== null || child.signalCode !== null) return
      child.kill('SIGTERM')
      await once(child, 'exit')
    },
  }
}
