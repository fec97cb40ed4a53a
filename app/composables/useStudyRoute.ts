import { refusal, type Action } from '#shared/access/actions'

/** The study that the page is about, and what the viewer may do there; the server decides, this only offers. */
export function useStudyRoute() {
  const route = useRoute()
  const { viewer } = useViewer()
  const studyId = computed(() => String(route.params.studyId))
  const membership = computed(() => viewer.value?.memberships.find(member => member.studyId === studyId.value) ?? null)

  const standing = computed(() => ({
    installationRole: viewer.value?.person.installationRole ?? null,
    studyRoles: membership.value?.roles ?? [],
    cleared: membership.value?.cleared ?? false,
    exposed: membership.value?.exposed ?? false,
    blindHolds: membership.value?.blindHolds ?? true,
  }))
  const can = (action: Action) => refusal(action, standing.value) === null

  return { studyId, membership, can }
}
