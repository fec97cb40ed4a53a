import { openApiOperation } from '#shared/contract/health'
import { openApiDocument } from '#shared/contract/openApi'

export default definePublicHandler(openApiOperation, ({ event }) => {
  setResponseHeader(event, 'Content-Type', 'application/json')
  return openApiDocument()
})
