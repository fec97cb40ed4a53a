import type { CustomTableLayout, StyleDictionary } from 'pdfmake/interfaces'
import { FONT } from './fonts'

/** Inks and washes of the light scheme. */
export const INK = {
  ink: '#1F2B27', soft: '#55625C', rule: '#DDD8CB', leaf: '#2C6548', ochre: '#7E5200', madder: '#98302B', slate: '#55626B',
  leafWash: '#E7F0E9', ochreWash: '#FAF0DA', caution: '#5B3B00',
} as const

/** A4 in points: left, top, right, bottom. */
export const MARGINS: [number, number, number, number] = [54, 80, 54, 108]
export const TEXT_WIDTH = 595.28 - MARGINS[0] - MARGINS[2]

export const STYLES: StyleDictionary = {
  title: { font: FONT.serif, bold: true, fontSize: 21, lineHeight: 1.1, color: INK.ink },
  heading: { font: FONT.serif, bold: true, fontSize: 13.5, color: INK.ink, margin: [0, 18, 0, 5] },
  subheading: { bold: true, fontSize: 9.5, color: INK.ink, margin: [0, 8, 0, 2] },
  lead: { fontSize: 10.6, lineHeight: 1.14 },
  soft: { color: INK.soft },
  small: { fontSize: 8, color: INK.soft },
  brand: { font: FONT.serif, bold: true, fontSize: 12.5, color: INK.leaf },
  analysis: { font: FONT.serif, bold: true, fontSize: 14, color: INK.ink },
  footer: { fontSize: 7.4, lineHeight: 1.02, color: INK.soft },
  footerCode: { font: FONT.code, fontSize: 6.6, color: INK.soft },
  code: { font: FONT.code, fontSize: 7.2, color: INK.ink },
  head: { bold: true, fontSize: 8.5, color: INK.soft },
  // Print needs every figure of a column to be as wide as the next.
  body: { font: FONT.sans, fontSize: 9.2, lineHeight: 1.06, color: INK.ink, fontFeatures: ['tnum'] },
}

/** Hairlines between rows, an ink line below the head, nothing at the sides. */
export const ruled: CustomTableLayout = {
  hLineWidth: (row, { table }) => row === 0 ? 0 : row === (table.headerRows ?? 0) ? 0.7 : 0.4,
  hLineColor: (row, { table }) => row === (table.headerRows ?? 0) && row > 0 ? INK.ink : INK.rule,
  vLineWidth: () => 0,
  paddingLeft: column => column === 0 ? 0 : 6,
  paddingRight: () => 2,
  paddingTop: () => 3.2,
  paddingBottom: () => 3.2,
}

/** Names at the left, what they stand for at the right, no lines. */
export const plain: CustomTableLayout = {
  hLineWidth: () => 0,
  vLineWidth: () => 0,
  paddingLeft: column => column === 0 ? 0 : 8,
  paddingRight: () => 0,
  paddingTop: () => 1.6,
  paddingBottom: () => 1.6,
}
