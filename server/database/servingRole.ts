import type { Database } from './client'

/** Why the web server must not serve with the role that it connects as. */
export type RoleFault = 'superuser' | 'owns-tables' | 'not-migrated'

/**
 * The application connects as a role that owns nothing, so that it cannot disable the triggers that keep the
 * record append-only.
 *
 * @returns what is wrong with the connected role or its database, or null.
 */
export async function servingRoleFault(db: Database): Promise<RoleFault | null> {
  const [row] = await db.$client<{ superuser: boolean, owns: boolean, migrated: boolean }[]>`
    select
      (select rolsuper from pg_roles where rolname = current_user) as superuser,
      exists (
        select from pg_class c join pg_namespace n on n.oid = c.relnamespace
        where n.nspname not in ('pg_catalog', 'information_schema') and n.nspname not like 'pg_temp%' and n.nspname not like 'pg_toast%'
          and c.relkind in ('r', 'p') and pg_has_role(current_user, c.relowner, 'USAGE')
      ) as owns,
      to_regclass('public.sign_in_session') is not null as migrated`
  if (row?.superuser) return 'superuser'
  if (row?.owns) return 'owns-tables'
  return row?.migrated ? null : 'not-migrated'
}
