import { existsSync } from 'node:fs'
import { createRequire } from 'node:module'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import type { TFontDictionary } from 'pdfmake/interfaces'

const FILES = {
  sans: ['source-sans', 'SourceSans3'],
  serif: ['source-serif', 'SourceSerif4'],
  code: ['source-code-pro', 'SourceCodePro'],
} as const

/** The folder beside the built server; the build copies the fonts there. */
const builtFolder = () => fileURLToPath(new URL('./fonts', import.meta.url))

/** Where one face lies: beside the built server, else in its package. */
function locate(family: keyof typeof FILES, face: string): string {
  const [packageName, prefix] = FILES[family]
  const file = `${prefix}-${face}.ttf`
  const built = join(builtFolder(), file)
  if (existsSync(built)) return built
  // Called when a memo is made, never at import: the bundler moves this module's address until then.
  const home = dirname(createRequire(import.meta.url).resolve(`${packageName}/package.json`))
  return join(home, 'TTF', file)
}

/** Names as the drawings use them, so that text inside an SVG finds its font too. */
export const FONT = { sans: 'Source Sans 3', serif: 'Source Serif 4', code: 'Source Code Pro' } as const

/** The embedded faces by their paths: pdfmake opens fonts by path, SVG text included. */
export function memoFonts(): TFontDictionary {
  const serif = locate('serif', 'Semibold')
  const code = locate('code', 'Regular')
  return {
    [FONT.sans]: {
      normal: locate('sans', 'Regular'), bold: locate('sans', 'Semibold'),
      italics: locate('sans', 'It'), bolditalics: locate('sans', 'SemiboldIt'),
    },
    [FONT.serif]: { normal: locate('serif', 'Regular'), bold: serif },
    [FONT.code]: { normal: code },
  }
}
