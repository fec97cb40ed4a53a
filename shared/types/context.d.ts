declare module 'h3' {
  interface H3EventContext {
    /** Given to each request by the first middleware. */
    requestId?: string
  }
}

export {}
