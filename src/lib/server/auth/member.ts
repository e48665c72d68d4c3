/**
 * Who may do what in a lab. Every load, action and endpoint asks here before it touches the lab's data.
 * An outsider is told the same as for a lab that does not exist.
 */
import { redirect } from '@sveltejs/kit';
import type { Knex } from 'knex';
import { labs } from '../db/repositories/labs';
import type { Lab, Role } from '../db/rows';
import { notFound, refuse } from '../errors';

/** The table of the product: rights by role. A deputy may sign off as well. */
export const RIGHTS = {
  read: ['owner', 'experimenter', 'operator', 'reader'],
  rehearse: ['owner', 'experimenter', 'operator', 'reader'],
  edit: ['owner', 'experimenter'],
  'pack-proof': ['owner', 'experimenter'],
  'pack-collection': ['owner', 'experimenter', 'operator'],
  return: ['owner', 'experimenter', 'operator'],
  manage: ['owner'],
  'sign-off': ['owner']
} as const satisfies Record<string, readonly Role[]>;
export type Right = keyof typeof RIGHTS;

export const can = (role: Role, right: Right, deputy = false): boolean =>
  (RIGHTS[right] as readonly Role[]).includes(role) || (right === 'sign-off' && deputy);

export interface Membership {
  lab: Lab;
  role: Role;
  deputy: boolean;
  userId: string;
}

const UUID = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/i;
export const isUuid = (text: string): boolean => UUID.test(text);

/** The membership, or 404 for an outsider and 403 for a role too low. */
export async function memberOf(db: Knex, userId: string, labId: string, right: Right): Promise<Membership> {
  const found = isUuid(labId) ? await labs(db).withMember(labId, userId) : null;
  if (!found) return notFound('lab');
  if (!can(found.role, right, found.deputy))
    refuse(
      403,
      `Your role in ${found.lab.name} is ${found.role}; this needs ${RIGHTS[right].join(' or ')}. ` +
        'An owner of the lab can change your role.'
    );
  return { ...found, userId };
}

/** For pages: as `memberOf`, but somebody not signed in is led to sign-in and back. */
export async function requireMember(locals: App.Locals, labId: string, right: Right): Promise<Membership> {
  return memberOf(locals.db, requireUser(locals).id, labId, right);
}

export function requireUser(locals: App.Locals) {
  if (!locals.user) redirect(303, `/sign-in?next=${encodeURIComponent(locals.path)}`);
  return locals.user;
}

/** A path of this site to go on to after sign-in, and never an address elsewhere. */
export const safeNext = (next: string | null, fallback = '/labs'): string =>
  next && /^\/(?![/\\])/.test(next) && !/[\\\p{Cc}]/u.test(next) ? next : fallback;

const OWNED = { study: 'studies', task: 'tasks', profile: 'profiles', revision: 'revisions' } as const;
export type OwnedKind = keyof typeof OWNED;
export const OWNED_KINDS = Object.keys(OWNED) as OwnedKind[];

/** The lab that something belongs to, if this person is a member of it; else 404. */
export async function labOf(db: Knex, userId: string, kind: OwnedKind, id: string): Promise<string> {
  if (!isUuid(id)) return notFound(kind);
  const row: { lab_id: string } | undefined = await db(`${OWNED[kind]} as x`)
    .join('memberships as m', 'm.lab_id', 'x.lab_id')
    .where({ 'x.id': id, 'm.user_id': userId })
    .first('x.lab_id');
  return row ? row.lab_id : notFound(kind);
}
