import * as allocations from './allocations'
import * as clearances from './clearances'
import * as deviations from './deviations'
import * as extracts from './extracts'
import * as health from './health'
import * as ledger from './ledger'
import * as mailbox from './mailbox'
import * as members from './members'
import type { Operation } from './operation'
import * as people from './people'
import * as plans from './plans'
import * as record from './record'
import * as session from './session'
import * as studies from './studies'

const resources: readonly Readonly<Record<string, unknown>>[] = [session, people, studies, members, clearances, health, plans, extracts, allocations, ledger, deviations, record, mailbox]

const isOperation = (value: unknown): value is Operation =>
  typeof value === 'object' && value !== null && 'method' in value && 'path' in value && 'answer' in value

/**
 * Every operation of the HTTP interface: whatever the files of resources export. The build compares it with
 * the routes, the walk test calls each, the published description is made from it.
 */
export const operations: readonly Operation[] = resources.flatMap(resource => Object.values(resource).filter(isOperation))
