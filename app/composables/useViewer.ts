import { viewerOperation, type ViewerView } from '#shared/contract/session'

/** Who is signed in and what they hold; read by the layout and shared by header, navigation and pages. */
export function useViewer() {
  const read = useApi(viewerOperation)
  const viewer = useState<ViewerView | null>('viewer', () => null)

  async function refresh() {
    viewer.value = await read({}).catch(() => null)
  }

  return { viewer, refresh }
}
