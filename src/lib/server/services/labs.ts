import type { Knex } from 'knex';
import { z } from 'zod';
import { audit } from '../db/repositories/audit';
import { labs } from '../db/repositories/labs';
import { members, userByEmail } from '../db/repositories/members';
import { ROLES, type Lab, type Member } from '../db/rows';
import { emailSchema } from '../auth/password';
import { accept, notFound, refuse } from '../errors';

export const labSchema = z.object({
  name: z.string().trim().min(1, 'a name for the lab').max(120, 'at most 120 characters')
});
export const roleSchema = z.enum(ROLES, `a role: ${ROLES.join(', ')}`);
export const addMemberSchema = z.object({ email: emailSchema, role: roleSchema });
export const changeMemberSchema = z
  .object({ role: roleSchema.optional(), deputy: z.boolean().optional() })
  .refine((c) => c.role !== undefined || c.deputy !== undefined, 'a new role, or whether to be deputy');

/** A new lab with its maker as owner. */
export async function createLab(
  db: Knex,
  userId: string,
  given: z.infer<typeof labSchema>,
  demo = false
): Promise<Lab> {
  const { name } = accept(labSchema, given);
  return db.transaction(async (trx) => {
    const lab = await labs(trx).insert(name, demo);
    await members(trx).insert(lab.id, userId, 'owner');
    await audit(trx).add(lab.id, userId, 'lab made', { name });
    return lab;
  });
}

export const listLabs = (db: Knex, userId: string) => labs(db).ofUser(userId);

export async function renameLab(db: Knex, labId: string, actor: string, given: z.infer<typeof labSchema>) {
  const { name } = accept(labSchema, given);
  await labs(db).rename(labId, name);
  await audit(db).add(labId, actor, 'lab renamed', { name });
}

export const listMembers = (db: Knex, labId: string) => members(db).list(labId);

/** Add somebody who has an account. */
export async function addMember(
  db: Knex,
  labId: string,
  actor: string,
  given: z.infer<typeof addMemberSchema>
): Promise<Member> {
  const { email, role } = accept(addMemberSchema, given);
  const user = await userByEmail(db, email);
  if (!user)
    return refuse(422, `There is no account for ${email}. Ask them to sign up first, then add them here.`, {
      details: [{ path: 'email', message: 'has no account yet' }]
    });
  return db.transaction(async (trx) => {
    if (await members(trx).find(labId, user.id))
      refuse(409, `${email} is a member of this lab already; change the role in the list.`);
    await members(trx).insert(labId, user.id, role);
    await audit(trx).add(labId, actor, 'member added', { email, role });
    return (await members(trx).find(labId, user.id))!;
  });
}

export async function changeMember(
  db: Knex,
  labId: string,
  actor: string,
  memberId: string,
  given: z.infer<typeof changeMemberSchema>
): Promise<Member> {
  const change = accept(changeMemberSchema, given);
  return db.transaction(async (trx) => {
    const owners = await members(trx).lockOwners(labId);
    const member = await members(trx).find(labId, memberId);
    if (!member) return notFound('member');
    if (change.role && change.role !== 'owner') keepAnOwner(owners, memberId);
    await members(trx).update(labId, memberId, change);
    await audit(trx).add(labId, actor, 'member changed', { email: member.email, ...change });
    return (await members(trx).find(labId, memberId))!;
  });
}

export async function removeMember(db: Knex, labId: string, actor: string, memberId: string): Promise<void> {
  await db.transaction(async (trx) => {
    const owners = await members(trx).lockOwners(labId);
    const member = await members(trx).find(labId, memberId);
    if (!member) return notFound('member');
    keepAnOwner(owners, memberId);
    await members(trx).remove(labId, memberId);
    await audit(trx).add(labId, actor, 'member removed', { email: member.email });
  });
}

function keepAnOwner(owners: string[], memberId: string): void {
  if (owners.length === 1 && owners[0] === memberId)
    refuse(409, 'A lab needs an owner, and this is its last one. Make another member an owner first.');
}
