/**
 * Reads the page's data again when the server says that something of the given kinds has changed in the study.
 * The event names kinds only; what may be seen is read through the ordinary operations.
 */
export function useStudyStream(studyId: string, kinds: readonly string[]) {
  let source: EventSource | null = null

  onMounted(() => {
    source = new EventSource(`/api/studies/${studyId}/events-stream`)
    source.addEventListener('change', (event) => {
      const { kind } = JSON.parse(String(event.data)) as { kind?: string }
      if (kind !== undefined && kinds.includes(kind)) void refreshNuxtData()
    })
  })
  onBeforeUnmount(() => source?.close())
}
