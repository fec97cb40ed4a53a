import { z, ZodError } from 'zod'
import { findingsOf } from '#shared/schemas/findings'

/**
 * What a form's schema finds wrong is worded as the server's findings are. In the browser only: on the server
 * the same zod answers the interface, with codes.
 */
export default defineNuxtPlugin({
  name: 'schema-messages',
  dependsOn: ['i18n:plugin'],
  setup() {
    const { $i18n } = useNuxtApp()
    z.setErrorMap((issue, { defaultError }) => {
      const finding = findingsOf(new ZodError([{ ...issue, message: defaultError }]))[0]
      return { message: finding ? $i18n.t(`problems.detail.${finding.code}`, wordedParams(finding.params)) : defaultError }
    })
  },
})
