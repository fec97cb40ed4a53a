/** The path of a form field for a JSON pointer: `/analyses/0/label` is `analyses[0].label`. */
export const fieldPath = (pointer: string) => pointer.split('/').slice(1)
  .map(part => part.replaceAll('~1', '/').replaceAll('~0', '~'))
  .reduce((path, part) => /^\d+$/.test(part) ? `${path}[${part}]` : path === '' ? part : `${path}.${part}`, '')
