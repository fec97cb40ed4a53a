import type { Figure, Measure } from '../../shared/decision/report'
import { measured, pValue, type Say } from './words'

const COUNTED: readonly Measure[] = ['count', 'not-positive']

function valueWords({ measure }: Figure, value: number, say: Say): string {
  const params = { measure: say(`memo.measure.${measure}`), value: measured(measure, value) }
  return COUNTED.includes(measure) ? say('memo.figures.counted', params) : say('memo.figures.value', params)
}

function probabilityWords({ adjustedP, pValue: p }: Figure, say: Say): string {
  if (adjustedP !== null) return `, ${pValue(adjustedP)} ${say('memo.figures.adjusted')}`
  return p === null ? '' : `, ${pValue(p)}`
}

/** A figure with its confidence limits and probability, as far as it has them: `G1 = 1.23 (0.56 to 1.91)`. */
export function figureWords(figure: Figure, say: Say): string {
  const { measure, value, lower, upper } = figure
  if (value === null) return say('memo.figures.undefined', { measure: say(`memo.measure.${measure}`) })
  const interval = lower === null || upper === null ? '' : say('memo.figures.interval', { lower: measured(measure, lower), upper: measured(measure, upper) })
  return valueWords(figure, value, say) + interval + probabilityWords(figure, say)
}
