import { viewerOperation } from '#shared/contract/session'

/** Who is signed in and what they hold; read once and shared by header, navigation and pages. */
export function useViewer() {
  const read = useApi(viewerOperation)
  const viewer = useState<Awaited<ReturnType<typeof read>> | null>('viewer', () => null)

  async function refresh() {
    viewer.value = await read({}).catch(() => null)
  }

  return { viewer, refresh }
}
