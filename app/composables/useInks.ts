import type { Inks } from '~/utils/chart'

const TOKENS = { data: '--leaf', fitted: '--ochre', reference: '--slate', axis: '--rule', text: '--soft', ground: '--sheet' } as const

function readInks(): Inks {
  const style = getComputedStyle(document.documentElement)
  const ink = (token: string) => `rgb(${style.getPropertyValue(token).trim().split(/\s+/).join(', ')})`
  return {
    data: ink(TOKENS.data), fitted: ink(TOKENS.fitted), reference: ink(TOKENS.reference),
    axis: ink(TOKENS.axis), text: ink(TOKENS.text), ground: ink(TOKENS.ground),
  }
}

/** The figure's inks from the colour tokens, renewed when the scheme changes. Only in the browser. */
export function useInks() {
  const inks = ref(readInks())
  const scheme = window.matchMedia('(prefers-color-scheme: dark)')
  const renew = () => {
    inks.value = readInks()
  }
  onMounted(() => scheme.addEventListener('change', renew))
  onBeforeUnmount(() => scheme.removeEventListener('change', renew))
  return inks
}
