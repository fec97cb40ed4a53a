import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'

// Contrast ratio of WCAG 2.2 (relative luminance of sRGB), computed from the tokens as they are served.
const css = readFileSync(new URL('../../../app/assets/css/tailwind.css', import.meta.url), 'utf8')

type Triple = readonly [number, number, number]
const tokensOf = (block: string) => new Map([...block.matchAll(/--([a-z-]+): (\d+) (\d+) (\d+);/g)]
  .map(([, name, ...rgb]) => [name!, rgb.map(Number) as unknown as Triple]))

const [before, after] = css.split('prefers-color-scheme: dark')
const schemes = {
  light: tokensOf(before!.slice(0, before!.indexOf('}'))),
  dark: tokensOf(after!.slice(0, after!.indexOf('}'))),
}

const channel = (value: number) => value / 255 <= 0.04045 ? value / 255 / 12.92 : ((value / 255 + 0.055) / 1.055) ** 2.4
const luminance = ([red, green, blue]: Triple) => 0.2126 * channel(red) + 0.7152 * channel(green) + 0.0722 * channel(blue)

function contrast(one: Triple, other: Triple): number {
  const [lighter, darker] = [luminance(one), luminance(other)].toSorted((a, b) => b - a)
  return (lighter! + 0.05) / (darker! + 0.05)
}

const GROUNDS = ['paper', 'sheet'] as const
const INKS = ['leaf', 'ochre', 'madder', 'slate'] as const
const TEXT = [
  ...GROUNDS.flatMap(ground => ['ink', 'soft', ...INKS].map(ink => [ink, ground] as const)),
  ...INKS.flatMap(ink => [[ink, `${ink}-wash`], ['ink', `${ink}-wash`], ['soft', `${ink}-wash`]] as const),
  ...['ochre', 'madder', 'slate'].map(ink => [ink, 'leaf-wash'] as const), // verdicts in the binding column
  ['sheet', 'leaf'], // words on a filled button
] as const
const MARKS = GROUNDS.flatMap(ground => ['edge', ...INKS].map(ink => [ink, ground] as const))

describe.each(Object.entries(schemes))('%s scheme', (_name, tokens) => {
  const ratio = (ink: string, ground: string) => contrast(tokens.get(ink)!, tokens.get(ground)!)

  it('defines the same fourteen roles', () => {
    expect([...tokens.keys()]).toEqual([...schemes.light.keys()])
    expect(tokens.size).toBe(14)
  })

  it.each(TEXT)('%s on %s is readable as text', (ink, ground) => {
    expect(ratio(ink, ground)).toBeGreaterThanOrEqual(4.5)
  })

  it.each(MARKS)('%s on %s is visible as a mark', (ink, ground) => {
    expect(ratio(ink, ground)).toBeGreaterThanOrEqual(3)
  })
})

it('knows the contrast of black on white', () => {
  expect(contrast([0, 0, 0], [255, 255, 255])).toBeWithinRelative(21, 1e-12)
})
