import { scaleLinear } from 'd3-scale'
import { INKS, type Axis, type Band, type Figure, type Label, type Line } from './figure'

/** Outer size in user units (points in print) and the room kept for axes. */
export interface Frame { readonly width: number, readonly height: number }

const ROOM = { left: 34, right: 8, top: 8, bottom: 34 } as const
const TEXT = 8

interface Place { readonly x: (value: number) => number, readonly y: (value: number) => number, readonly frame: Frame }

const escaped = (text: string) => text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;')

/** Hundredths of a unit: finer is not seen and makes files longer. */
const short = (value: number) => String(Math.round(value * 100) / 100)

function placeOf({ x, y }: Figure, frame: Frame): Place {
  const across = scaleLinear().domain(x.domain).range([ROOM.left, frame.width - ROOM.right])
  const up = scaleLinear().domain(y.domain).range([frame.height - ROOM.bottom, ROOM.top])
  return { x: value => across(value), y: value => up(value), frame }
}

const pathThrough = (points: readonly (readonly [number, number])[]) =>
  points.map(([x, y], index) => `${index === 0 ? 'M' : 'L'}${short(x)} ${short(y)}`).join('')

const text = (words: string, x: number, y: number, anchor: Label['anchor'], ink: string, turn = '') =>
  `<text x="${short(x)}" y="${short(y)}" text-anchor="${anchor}" font-family="Source Sans 3" font-size="${TEXT}" fill="${ink}"${turn}>${escaped(words)}</text>`

function horizontalAxis(axis: Axis, { x, frame }: Place): string {
  const base = frame.height - ROOM.bottom
  const rule = `<path d="M${ROOM.left} ${base}H${frame.width - ROOM.right}" fill="none" stroke="${INKS.axis}" stroke-width="0.7"/>`
  const ticks = axis.ticks.map(tick => text(tick.label, x(tick.value), base + TEXT + 4, 'middle', INKS.text))
  const title = text(axis.title, (ROOM.left + frame.width - ROOM.right) / 2, base + 2 * TEXT + 11, 'middle', INKS.text)
  return rule + ticks.join('') + title
}

function verticalAxis(axis: Axis, { y, frame }: Place): string {
  const base = frame.height - ROOM.bottom
  const rule = `<path d="M${ROOM.left} ${ROOM.top}V${base}" fill="none" stroke="${INKS.axis}" stroke-width="0.7"/>`
  const ticks = axis.ticks.map(tick => text(tick.label, ROOM.left - 4, y(tick.value) + TEXT / 3, 'end', INKS.text))
  const middle = (ROOM.top + base) / 2
  const title = axis.title === '' ? '' : text(axis.title, TEXT, middle, 'middle', INKS.text, ` transform="rotate(-90 ${TEXT} ${short(middle)})"`)
  return rule + ticks.join('') + title
}

function drawBand({ role, points }: Band, { x, y }: Place): string {
  const upper = points.map(point => [x(point.x), y(point.upper)] as const)
  const lower = points.map(point => [x(point.x), y(point.lower)] as const)
  const area = `<path d="${pathThrough([...upper, ...[...lower].reverse()])}Z" fill="${INKS[role]}" fill-opacity="0.08" stroke="none"/>`
  const edges = [upper, lower].map(edge => `<path d="${pathThrough(edge)}" fill="none" stroke="${INKS[role]}" stroke-opacity="0.6" stroke-width="0.6" stroke-dasharray="2 2"/>`)
  return area + edges.join('')
}

const drawLine = ({ role, points }: Line, { x, y }: Place) =>
  `<path d="${pathThrough(points.map(point => [x(point.x), y(point.y)]))}" fill="none" stroke="${INKS[role]}" stroke-width="1.1"/>`

function drawBars({ bars, y: axis }: Figure, { x, y }: Place): string {
  const base = y(axis.domain[0])
  return bars.filter(bar => bar.height > 0).map(({ from, to, height }) => {
    const left = x(from) + 0.5
    return `<rect x="${short(left)}" y="${short(y(height))}" width="${short(Math.max(x(to) - 0.5 - left, 0.5))}" height="${short(base - y(height))}" fill="${INKS.data}" fill-opacity="0.8"/>`
  }).join('')
}

const drawDots = ({ dots }: Figure, { x, y }: Place) =>
  dots.map(dot => `<circle cx="${short(x(dot.x))}" cy="${short(y(dot.y))}" r="1.5" fill="${INKS.data}"/>`).join('')

const BESIDE = { start: 5, middle: 0, end: -5 } as const

/** A label keeps clear of its mark: beside it, and below where the mark is a reference. */
const drawLabel = ({ role, text: words, x, y, anchor }: Label, place: Place) =>
  text(words, place.x(x) + BESIDE[anchor], place.y(y) + (role === 'reference' ? TEXT + 3 : 0), anchor, INKS[role])

/**
 * Draws a figure as a stand-alone SVG document, band and reference behind the data. What lies beyond the axes
 * is clipped, labels are not.
 */
export function toSvg(figure: Figure, frame: Frame): string {
  const place = placeOf(figure, frame)
  const behind = [...figure.bands.map(band => drawBand(band, place))]
  const lines = figure.lines.map(line => drawLine(line, place))
  const [under, over] = figure.kind === 'histogram' ? [[], lines] : [lines, []]
  const clip = `<clipPath id="area"><rect x="${ROOM.left}" y="${ROOM.top}" width="${frame.width - ROOM.left - ROOM.right}" height="${frame.height - ROOM.top - ROOM.bottom}"/></clipPath>`
  const marks = [...behind, ...under, drawBars(figure, place), ...over, drawDots(figure, place)].join('')
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${frame.width} ${frame.height}" width="${frame.width}" height="${frame.height}" role="img" aria-label="${escaped(figure.title)}">`
    + `<defs>${clip}</defs>${horizontalAxis(figure.x, place)}${verticalAxis(figure.y, place)}<g clip-path="url(#area)">${marks}</g>`
    + `${figure.labels.map(label => drawLabel(label, place)).join('')}</svg>`
}
