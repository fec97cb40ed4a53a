import type { Content } from 'pdfmake/interfaces'
import type { PrerequisiteVerdict, SeenVerdict } from '../../shared/plan/terms'
import { INK } from './styles'

/** The leaf of the verdict marks, 20 × 14, and its lower half. */
const LEAF = 'M1 7C5 1 14 0 19 7C14 14 5 13 1 7Z'
const LOWER_HALF = 'M1 7C5 13 14 14 19 7Z'

type Shape = 'filled' | 'half' | 'struck' | 'dashed' | 'barred'

const SHAPES: Readonly<Record<Shape, { readonly ink: string, readonly body: string }>> = {
  filled: { ink: INK.leaf, body: `<path d="${LEAF}" fill="${INK.leaf}"/>` },
  half: { ink: INK.ochre, body: `<path d="${LEAF}" fill="none" stroke="${INK.ochre}" stroke-width="1.6"/><path d="${LOWER_HALF}" fill="${INK.ochre}"/>` },
  struck: { ink: INK.madder, body: `<path d="${LEAF}" fill="none" stroke="${INK.madder}" stroke-width="1.6"/><path d="M6 2L14 12" stroke="${INK.madder}" stroke-width="1.8"/>` },
  dashed: { ink: INK.slate, body: `<path d="${LEAF}" fill="none" stroke="${INK.slate}" stroke-width="1.4" stroke-dasharray="2 2"/>` },
  barred: { ink: INK.slate, body: `<path d="${LEAF}" fill="none" stroke="${INK.slate}" stroke-width="1.4"/><path d="M5 7H15" stroke="${INK.slate}" stroke-width="1.6"/>` },
}

const SHAPE_OF: Readonly<Record<SeenVerdict | PrerequisiteVerdict | 'held', Shape>> = {
  'planned-method-stands': 'filled',
  'met': 'filled',
  'fallback-applies': 'half',
  'no-registered-method': 'struck',
  'not-met': 'struck',
  'not-assessable': 'dashed',
  'held-behind-the-blind': 'barred',
  'held': 'barred',
}

export type Marked = keyof typeof SHAPE_OF

const drawing = (body: string) => `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 20 14" width="20" height="14">${body}</svg>`

/** A verdict mark with its words: the shape tells before the colour, the words before both. */
export function marked(verdict: Marked, words: string, { bold = false, size = 11 } = {}): Content {
  const { ink, body } = SHAPES[SHAPE_OF[verdict]]
  return {
    columns: [{ svg: drawing(body), width: size, margin: [0, 2.2, 0, 0] }, { text: words, color: ink, bold, width: '*' }],
    columnGap: 4,
  }
}

const BRAND = `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 26 26" width="26" height="26">`
  + `<path d="M13 25V9" stroke="${INK.leaf}" stroke-width="2"/><path d="M13 14C9 14 3 12 2 4C9 4 13 8 13 14Z" fill="${INK.leaf}"/>`
  + `<path d="M13 14C17 14 23 12 24 4C17 4 13 8 13 14Z" fill="${INK.leaf}" fill-opacity="0.55"/></svg>`

/** Stem with two stipules. */
export const brandMark = (size: number): Content => ({ svg: BRAND, width: size })
