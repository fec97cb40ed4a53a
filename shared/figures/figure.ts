/**
 * A figure described purely, in the units of its data: the app maps it to Chart.js, `toSvg` draws it for memo,
 * print and export. Every text in it has been worded already.
 */
export interface Figure {
  readonly kind: 'histogram' | 'normal-quantile'
  /** Accessible name. */
  readonly title: string
  readonly x: Axis
  readonly y: Axis
  /** Drawn in this order: bands, bars, lines, dots, labels. */
  readonly bands: readonly Band[]
  readonly bars: readonly Bar[]
  readonly lines: readonly Line[]
  readonly dots: readonly Dot[]
  readonly labels: readonly Label[]
}

export interface Axis {
  /** Quantity and unit; empty for an axis that needs no name. */
  readonly title: string
  readonly domain: readonly [number, number]
  readonly ticks: readonly Tick[]
}

interface Tick { readonly value: number, readonly label: string }

/** What a mark stands for; decides its ink (`INKS`). */
export type Role = 'data' | 'fitted' | 'reference'

interface Bar { readonly from: number, readonly to: number, readonly height: number }
export interface Dot { readonly x: number, readonly y: number }
export interface Line { readonly role: Role, readonly points: readonly Dot[] }
/** Region between two curves over the same x. */
export interface Band { readonly role: Role, readonly points: readonly { readonly x: number, readonly lower: number, readonly upper: number }[] }
/** A direct label beside its mark, in place of a legend. */
export interface Label { readonly role: Role, readonly text: string, readonly x: number, readonly y: number, readonly anchor: 'start' | 'middle' | 'end' }

/** Inks of the light scheme, as print uses them. */
export const INKS: Readonly<Record<Role | 'axis' | 'text', string>> = {
  data: '#2C6548',
  fitted: '#7E5200',
  reference: '#55626B',
  axis: '#DDD8CB',
  text: '#55625C',
}
