import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { PlotData } from '#shared/decision/report'
import { histogram } from '#shared/figures/histogram'
import { quantilePlot } from '#shared/figures/quantilePlot'
import { toSvg } from '#shared/figures/toSvg'

const plot: PlotData = {
  quantity: 'residuals',
  unit: 'mg/L',
  edges: [-2, -1, 0, 1, 2],
  counts: [2, 8, 8, 2],
  fitted: { mean: 0, sd: 1 },
  quantiles: [-1.5, -0.5, 0.5, 1.5].map(at => ({ theoretical: at, value: at * 1.1, lower: at - 0.8, upper: at + 0.8 })),
}
const barWords = { title: 'hs-CRP', quantity: 'hs-CRP, mg/L', count: 'subjects', fitted: 'fitted normal' }
const dotWords = { title: 'hs-CRP', quantity: 'hs-CRP, mg/L', normalQuantile: 'normal quantile', band: '95 % band' }

describe('histogram', () => {
  it('has one bar per bin over its edges', () => {
    expect(histogram(plot, barWords).bars).toEqual([
      { from: -2, to: -1, height: 2 }, { from: -1, to: 0, height: 8 }, { from: 0, to: 1, height: 8 }, { from: 1, to: 2, height: 2 },
    ])
  })

  it('scales the fitted normal to expected counts: n × width × density at the mean', () => {
    const curve = histogram(plot, barWords).lines[0]?.points ?? []
    const summit = Math.max(...curve.map(point => point.y))
    expect(summit).toBeCloseTo(20 / Math.sqrt(2 * Math.PI), 10)
  })

  it('encloses under the curve about as many subjects as were counted', () => {
    const wide = { ...plot, edges: [-6, -5, -4, -3, -2, -1, 0, 1, 2, 3, 4, 5, 6], counts: [0, 0, 0, 0, 2, 8, 8, 2, 0, 0, 0, 0] }
    const curve = histogram(wide, barWords).lines[0]?.points ?? []
    const area = curve.slice(1).reduce((sum, point, index) => {
      const before = curve[index] ?? point
      return sum + (point.x - before.x) * (point.y + before.y) / 2
    }, 0)
    expect(area).toBeCloseTo(20, 4)
  })

  it('draws no curve where nothing varies', () => {
    const constant = histogram({ ...plot, edges: [3, 3], counts: [20], fitted: { mean: 3, sd: 0 } }, barWords)
    expect(constant.lines).toEqual([])
    expect(constant.x.domain[0]).toBeLessThan(3)
    expect(constant.x.domain[1]).toBeGreaterThan(3)
  })
})

describe('quantilePlot', () => {
  it('passes the reference line through mean and standard deviation of the fit', () => {
    const [from, to] = quantilePlot({ ...plot, fitted: { mean: 5, sd: 2 } }, dotWords).lines[0]?.points ?? []
    expect(from && (from.y - 5) / from.x).toBeCloseTo(2, 12)
    expect(to && (to.y - 5) / to.x).toBeCloseTo(2, 12)
  })

  it('covers every point and both edges of the band', () => {
    const { y, dots, bands } = quantilePlot(plot, dotWords)
    expect(dots).toHaveLength(4)
    for (const { lower, upper } of bands[0]?.points ?? []) {
      expect(lower).toBeGreaterThanOrEqual(y.domain[0])
      expect(upper).toBeLessThanOrEqual(y.domain[1])
    }
  })

  it('describes an empty plot without inventing a label', () => {
    const empty = quantilePlot({ ...plot, fitted: null, quantiles: [] }, dotWords)
    expect([empty.dots, empty.bands, empty.lines, empty.labels]).toEqual([[], [], [], []])
  })
})

const number = (svg: string, attribute: string) => [...svg.matchAll(new RegExp(` ${attribute}="([^"]+)"`, 'g'))].map(match => Number(match[1]))

describe('toSvg', () => {
  const frame = { width: 240, height: 160 }

  it('places bars by their height on one base line', () => {
    const svg = toSvg(histogram(plot, barWords), frame)
    const bars = [...svg.matchAll(/<rect x="[\d.]+" y="([\d.]+)" width="[\d.]+" height="([\d.]+)" fill="#2C6548"/g)].map(([, y, height]) => [Number(y), Number(height)] as const)
    expect(bars).toHaveLength(4)
    for (const [y, height] of bars) expect(y + height).toBeCloseTo(frame.height - 34, 1)
    expect((bars[1]?.[1] ?? 0) / (bars[0]?.[1] ?? 1)).toBeCloseTo(4, 1)
  })

  it('draws one dot per quantile, higher values higher up', () => {
    const heights = number(toSvg(quantilePlot(plot, dotWords), frame), 'cy')
    expect(heights).toHaveLength(4)
    expect([...heights].sort((a, b) => b - a)).toEqual(heights)
  })

  it('keeps mark-up in labels from becoming mark-up of the drawing', () => {
    const svg = toSvg(histogram(plot, { ...barWords, quantity: '<b>&"x' }), frame)
    expect(svg).toContain('&lt;b&gt;&amp;&quot;x')
    expect(svg).not.toContain('<b>')
  })

  it('writes finite coordinates for any finite data', () => {
    const finite = fc.double({ min: -1e12, max: 1e12, noNaN: true })
    fc.assert(fc.property(fc.array(finite, { minLength: 1, maxLength: 30 }), (values) => {
      const sorted = [...values].sort((a, b) => a - b)
      const quantiles = sorted.map((value, index) => ({ theoretical: index - sorted.length / 2, value, lower: value - 1, upper: value + 1 }))
      const svg = toSvg(quantilePlot({ ...plot, unit: '1', edges: [0, 1], counts: [1], fitted: null, quantiles }, dotWords), frame)
      expect(svg).not.toMatch(/NaN|Infinity/)
    }))
  })
})
