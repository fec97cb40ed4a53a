import type { SessionId } from '../schemas/ids'

declare module 'next-auth' {
  interface User {
    /** Row of `sign_in_session`. */
    sid: SessionId
  }
  interface Session {
    user: { name: string }
  }
}

declare module 'next-auth/jwt' {
  interface JWT {
    sid?: SessionId
  }
}
