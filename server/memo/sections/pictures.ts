import type { Content } from 'pdfmake/interfaces'
import type { PlotData } from '../../../shared/decision/report'
import { histogram } from '../../../shared/figures/histogram'
import { quantilePlot } from '../../../shared/figures/quantilePlot'
import { toSvg } from '../../../shared/figures/toSvg'
import type { MemoContent } from '../../../shared/memo/content'
import { subheading } from '../blocks'
import { figureWords } from '../figureWords'
import { TEXT_WIDTH } from '../styles'
import { count, type Say } from '../words'

const GAP = 14
const FRAME = { width: Math.floor((TEXT_WIDTH - GAP) / 2), height: 168 }

function pair(plot: PlotData, memo: MemoContent, say: Say): Content {
  const { endpoint } = memo.analysis
  const named = say(`plan.plotted.${plot.quantity}`)
  const quantity = plot.unit === '1' ? named : say('memo.figure.withUnit', { quantity: named, unit: plot.unit })
  const title = say('memo.figure.title', { endpoint: endpoint.label, quantity })
  const bars = histogram(plot, { title, quantity, count: say('memo.figure.count'), fitted: say('memo.figure.fitted') })
  const dots = quantilePlot(plot, { title, quantity, normalQuantile: say('memo.figure.normalQuantile'), band: say('memo.figure.band') })
  return { columns: [bars, dots].map(figure => ({ svg: toSvg(figure, FRAME), width: FRAME.width })), columnGap: GAP }
}

function caption({ judged: { plot, proxy } }: MemoContent, shown: PlotData, say: Say): string {
  if (plot !== null || proxy === null) return say('memo.figure.judged', { count: count(shown.counts.reduce((sum, bin) => sum + bin, 0)) })
  return say('memo.figure.proxy', { count: count(proxy.n), figures: proxy.figures.map(figure => figureWords(figure, say)).join('; ') })
}

/**
 * The plot of the judged quantity where this edition may show it, else that of the arm-free proxy, which
 * decides nothing and says so.
 */
export function picturesSection(memo: MemoContent, say: Say): Content[] {
  const { plot, proxy } = memo.judged
  const shown = plot ?? proxy?.plot
  if (!shown) return []
  return [{
    unbreakable: true,
    stack: [
      subheading(say(plot ? 'memo.heading.plot' : 'memo.heading.proxy')),
      { text: caption(memo, shown, say), style: 'small', margin: [0, 0, 0, 4] },
      pair(shown, memo, say),
    ],
  }]
}
