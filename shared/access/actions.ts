/** Roles of a study. Clearance for arms is no role: it is an entry of its own beside `biostatistician`. */
export const STUDY_ROLES = ['biostatistician', 'data-manager', 'investigator', 'monitor'] as const
export type StudyRole = typeof STUDY_ROLES[number]

/** Roles of the installation. An administrator holds no study membership and cannot sign. */
export const INSTALLATION_ROLES = ['administrator'] as const
export type InstallationRole = typeof INSTALLATION_ROLES[number]

/**
 * How exposure to allocation bears on an action: `cleared` needs a clearance in force, `unexposed` refuses
 * whoever has had an allocation or arm-level view while the blind holds, `any` does not ask.
 */
export type Exposure = 'cleared' | 'unexposed' | 'any'

interface Rule {
  /** Who may act; `signed-in` is everybody with an account, whatever they hold. */
  readonly roles: readonly (StudyRole | InstallationRole)[] | 'signed-in'
  readonly exposure: Exposure
  /** Signed with identifier and password again. */
  readonly signed?: true
}

const everyMember: readonly StudyRole[] = STUDY_ROLES
const statistician = ['biostatistician'] as const

/**
 * The one table of role × action. The server enforces it in one place, the client reads it to offer only what
 * will be accepted. Duties that depend on who did something before (reviewer is not author, settler is not
 * uploader) are checked by `separation.ts` on top of it.
 */
export const ACTIONS = {
  'installation.read': { roles: ['administrator'], exposure: 'any' },
  'people.read': { roles: ['administrator'], exposure: 'any' },
  'people.manage': { roles: ['administrator'], exposure: 'any' },
  'studies.create': { roles: ['administrator'], exposure: 'any' },
  'members.manage': { roles: ['administrator'], exposure: 'any' },
  'clearance.grant': { roles: ['administrator'], exposure: 'any' },

  'own.read': { roles: 'signed-in', exposure: 'any' },
  'study.read': { roles: [...everyMember], exposure: 'any' },
  'members.read': { roles: ['administrator', ...everyMember], exposure: 'any' },
  'clearance.propose': { roles: statistician, exposure: 'any' },

  'plan.read': { roles: [...everyMember], exposure: 'any' },
  'plan.author': { roles: statistician, exposure: 'unexposed' },
  'plan.sign-author': { roles: statistician, exposure: 'unexposed', signed: true },
  'plan.sign-reviewer': { roles: statistician, exposure: 'unexposed', signed: true },

  'extract.read': { roles: [...everyMember], exposure: 'any' },
  'extract.upload': { roles: ['data-manager'], exposure: 'unexposed' },
  'extract.download': { roles: ['data-manager', 'biostatistician'], exposure: 'any' },
  'extract.give-reason': { roles: statistician, exposure: 'unexposed', signed: true },
  'extract.withdraw': { roles: ['data-manager'], exposure: 'any', signed: true },
  'query.resolve': { roles: statistician, exposure: 'unexposed', signed: true },

  'allocation.read': { roles: statistician, exposure: 'cleared' },
  'allocation.upload': { roles: statistician, exposure: 'cleared' },
  'arms.read': { roles: statistician, exposure: 'cleared' },
  'release.preview': { roles: statistician, exposure: 'cleared' },
  'release.sign': { roles: statistician, exposure: 'cleared', signed: true },

  'ledger.read': { roles: [...everyMember], exposure: 'any' },
  'verdict.read': { roles: [...everyMember], exposure: 'any' },

  'event.read': { roles: [...everyMember], exposure: 'any' },
  'event.lock-database': { roles: ['data-manager'], exposure: 'any', signed: true },
  'event.fix-method': { roles: statistician, exposure: 'unexposed', signed: true },
  'event.break-blind': { roles: statistician, exposure: 'cleared', signed: true },

  'deviation.read': { roles: [...everyMember], exposure: 'any' },
  'deviation.acknowledge': { roles: ['investigator'], exposure: 'any', signed: true },
  'deviation.settle': { roles: statistician, exposure: 'unexposed', signed: true },

  'memo.read': { roles: [...everyMember], exposure: 'any' },
  'memo.sign': { roles: statistician, exposure: 'unexposed', signed: true },

  'record.read': { roles: [...everyMember], exposure: 'any' },
} as const satisfies Record<string, Rule>

export type Action = keyof typeof ACTIONS

/** What the table needs to know of the person who asks. */
export interface Standing {
  readonly installationRole: InstallationRole | null
  /** Roles held in the study at hand; empty outside a study. */
  readonly studyRoles: readonly StudyRole[]
  /** A clearance of this study is in force now. */
  readonly cleared: boolean
  /** Has ever had an allocation or arm-level view of this study. */
  readonly exposed: boolean
  /** The study is blinded and its blind is not broken. */
  readonly blindHolds: boolean
}

export type Refusal = 'not-permitted' | 'exposed'

function holdsRole(roles: Rule['roles'], { studyRoles, installationRole }: Standing): boolean {
  if (roles === 'signed-in') return true
  const held: readonly string[] = [...studyRoles, ...(installationRole ? [installationRole] : [])]
  return roles.some(role => held.includes(role))
}

/** Whether an action of a study is open to administrators, who hold no membership of it. */
export const opensToAdministrators = (action: Action): boolean => holdsRole(ACTIONS[action].roles, {
  installationRole: 'administrator', studyRoles: [], cleared: false, exposed: false, blindHolds: false,
})

/** `null` when the action is open to this standing, else why not. */
export function refusal(action: Action, standing: Standing): Refusal | null {
  const rule: Rule = ACTIONS[action]
  if (!holdsRole(rule.roles, standing)) return 'not-permitted'
  if (rule.exposure === 'cleared' && !standing.cleared) return 'not-permitted'
  if (rule.exposure === 'unexposed' && standing.blindHolds && (standing.exposed || standing.cleared)) return 'exposed'
  return null
}

/** Whether an action asks for identifier and password again. */
export const isSigned = (action: Action): boolean => (ACTIONS[action] as Rule).signed === true
