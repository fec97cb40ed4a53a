import { existsSync } from 'node:fs'
import { basename, dirname, posix, resolve } from 'node:path'
import type { Plugin } from 'rollup'

const PREFIX = '\0thread:'
const MARK = /__NITRO_FILE_URL__\("([^"]+)"\)/g

/**
 * Lets one Nitro build emit further programs beside the web server (the worker process, the migration,
 * command-line entries), and turns `import url from './name?thread'` into the URL of a thread's own chunk.
 *
 * Nitro rewrites `import.meta.url` to that of the entry; `_import_meta_url_` is the token that it turns into
 * the real one, so the mark below is replaced only when a chunk is rendered.
 */
export function workerEntries(entries: Record<string, string>): Plugin {
  return {
    name: 'worker-entries',
    buildStart() {
      for (const [fileName, id] of Object.entries(entries)) this.emitFile({ type: 'chunk', id, fileName })
    },
    resolveId: {
      order: 'pre',
      handler(source, importer) {
        if (!importer || !source.endsWith('?thread')) return
        const file = resolve(dirname(importer), source.replace(/\?thread$/, '.ts'))
        if (!existsSync(file)) this.error(`no such worker: ${file}`)
        return PREFIX + file
      },
    },
    load(id) {
      if (!id.startsWith(PREFIX)) return
      const file = id.slice(PREFIX.length)
      const fileName = `workers/${basename(file, '.ts')}.mjs`
      this.emitFile({ type: 'chunk', id: file, fileName })
      return `export default __NITRO_FILE_URL__("${fileName}")`
    },
    renderChunk(code, chunk) {
      if (!code.includes('__NITRO_FILE_URL__')) return
      const from = posix.dirname(chunk.fileName)
      return {
        code: code.replace(MARK, (_mark, file: string) => {
          const path = posix.relative(from, file)
          return `new URL("${path.startsWith('.') ? path : `./${path}`}", _import_meta_url_).href`
        }),
        map: null,
      }
    },
  }
}
