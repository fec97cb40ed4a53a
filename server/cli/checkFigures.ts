import type { Figure, SampleReport, SeenPrerequisite } from '../../shared/decision/report'
import { say } from '../../shared/wording/say'

/** Four significant digits, as a terminal is read; the JSON report has all of them. */
const brief = (x: number): string => String(Number(x.toPrecision(4)))
const TINY = 1e-4

const pText = (p: number): string => (p < TINY ? say('en', 'plan.check.pTiny') : say('en', 'plan.check.pValue', { p: brief(p) }))

function figureText({ measure, value, lower, upper, pValue, adjustedP, limit }: Figure): string {
  const parts = [
    `${say('en', `verdict.measure.${measure}`)} ${value === null ? '–' : brief(value)}`,
    lower === null || upper === null ? null : say('en', 'plan.check.interval', { lower: brief(lower), upper: brief(upper) }),
    pValue === null ? null : pText(pValue),
    adjustedP === null ? null : say('en', 'plan.check.adjusted', { p: brief(adjustedP) }),
    limit === null ? null : say('en', 'plan.check.limit', { limit: brief(limit) }),
  ]
  return parts.filter(part => part !== null).join(', ')
}

function sampleText({ arm, n, figures }: SampleReport): string {
  const list = figures.map(figureText).join('; ')
  const words = arm === null ? say('en', 'plan.check.pooled', { size: n, figures: list }) : say('en', 'plan.check.sample', { arm, size: n, figures: list })
  return words.replace(/: $/, '')
}

/**
 * The figures of the whole on a line, then one line for each sample; samples that have only a size share one.
 * Nothing for what is withheld.
 */
export function figureLines({ samples, figures }: Pick<SeenPrerequisite, 'samples' | 'figures'>): string[] {
  const whole = figures.length === 0 ? [] : [figures.map(figureText).join('; ')]
  const bare = samples.every(sample => sample.figures.length === 0)
  const lines = samples.map(sampleText)
  return [...whole, ...bare && lines.length > 0 ? [lines.join('; ')] : lines]
}
