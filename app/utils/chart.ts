import type { ChartData, ChartDataset, ChartOptions, Plugin } from 'chart.js'
import type { Axis, Figure, Role } from '#shared/figures/figure'

/** Colours by role; `ground` is that of the sheet behind the figure. */
export type Inks = Record<Role | 'axis' | 'text' | 'ground', string>

type Dataset = ChartDataset<'scatter'>

const faint = (ink: string, alpha: number) => ink.replace('rgb(', 'rgba(').replace(')', `, ${alpha})`)

const curve = (points: readonly { x: number, y: number }[], style: Partial<Dataset>): Dataset => ({
  data: points.map(({ x, y }) => ({ x, y })), showLine: true, pointRadius: 0, borderWidth: 1.4, ...style,
})

/** A bar as a closed outline, so that its edges stand exactly where the bin's do. */
function barDataset({ bars }: Figure, inks: Inks): Dataset[] {
  if (bars.length === 0) return []
  const outline = bars.flatMap(({ from, to, height }) => [{ x: from, y: 0 }, { x: from, y: height }, { x: to, y: height }, { x: to, y: 0 }])
  return [curve(outline, { fill: 'origin', backgroundColor: faint(inks.data, 0.8), borderColor: inks.ground, borderWidth: 1 })]
}

function bandDatasets({ bands }: Figure, inks: Inks, before: number): Dataset[] {
  return bands.flatMap(({ role, points }, index) => {
    const style = { borderColor: faint(inks[role], 0.6), borderDash: [3, 3], borderWidth: 1 }
    return [
      curve(points.map(({ x, lower }) => ({ x, y: lower })), style),
      curve(points.map(({ x, upper }) => ({ x, y: upper })), { ...style, fill: before + 2 * index, backgroundColor: faint(inks[role], 0.08) }),
    ]
  })
}

/** Maps the pure figure to Chart.js datasets; the order of drawing is the figure's. */
export function chartData(figure: Figure, inks: Inks): ChartData<'scatter'> {
  const behind = [...bandDatasets(figure, inks, 0), ...barDataset(figure, inks)]
  const lines = figure.lines.map(({ role, points }) => curve(points, { borderColor: inks[role], borderWidth: role === 'fitted' ? 2 : 1.4 }))
  const dots: Dataset[] = figure.dots.length === 0
    ? []
    : [{ data: figure.dots.map(({ x, y }) => ({ x, y })), pointRadius: 2.6, backgroundColor: inks.data, borderWidth: 0 }]
  const datasets = [...behind, ...lines, ...dots]
  // Chart.js draws the first dataset on top; `order` turns that round.
  return { datasets: datasets.map((dataset, index) => ({ ...dataset, order: datasets.length - index })) }
}

function scale(axis: Axis, inks: Inks) {
  const labels = new Map(axis.ticks.map(({ value, label }) => [value, label]))
  return {
    type: 'linear' as const,
    min: axis.domain[0],
    max: axis.domain[1],
    title: { display: axis.title !== '', text: axis.title, color: inks.text, font: { size: 12 } },
    border: { color: inks.axis },
    grid: { display: false },
    afterBuildTicks: (built: { ticks: { value: number }[] }) => {
      built.ticks = axis.ticks.map(({ value }) => ({ value }))
    },
    ticks: { color: inks.text, font: { size: 12 }, callback: (value: string | number) => labels.get(Number(value)) ?? '' },
  }
}

export function chartOptions(figure: Figure, inks: Inks): ChartOptions<'scatter'> {
  return {
    animation: false,
    responsive: true,
    maintainAspectRatio: false,
    font: { family: '"Source Sans 3"' },
    events: [],
    plugins: { legend: { display: false }, tooltip: { enabled: false } },
    scales: { x: scale(figure.x, inks), y: scale(figure.y, inks) },
  }
}

/** How much of a label stands left of its point. */
const SHIFT = { start: 0, middle: 0.5, end: 1 } as const

/** Writes the direct labels beside their marks, inside the figure's area. */
export const labelPlugin = (figure: Figure, inks: Inks): Plugin<'scatter'> => ({
  id: 'directLabels',
  afterDatasetsDraw({ ctx, scales, chartArea }) {
    ctx.save()
    ctx.font = '12px "Source Sans 3"'
    for (const { role, text, x, y, anchor } of figure.labels) {
      const width = ctx.measureText(text).width
      const wanted = scales.x!.getPixelForValue(x) - SHIFT[anchor] * width
      const from = Math.max(chartArea.left, Math.min(wanted, chartArea.right - width))
      ctx.fillStyle = inks[role]
      ctx.fillText(text, from, scales.y!.getPixelForValue(y))
    }
    ctx.restore()
  },
})
