/** Accounts, a lab with one member of each role, a study and a task. */
import type { Knex } from 'knex';
import { signUp } from '$lib/server/auth/accounts';
import type { Role, User } from '$lib/server/db/rows';
import { addMember, createLab } from '$lib/server/services/labs';
import { createStudy } from '$lib/server/services/studies';
import { createTask } from '$lib/server/services/tasks';

let count = 0;
export const PASSWORD = 'lantern and chime';

export function person(db: Knex, name = 'Someone'): Promise<User> {
  return signUp(db, { email: `person${++count}@marram.example`, name, password: PASSWORD });
}

export async function labWithRoles(db: Knex) {
  const people = {} as Record<Role | 'outsider', User>;
  for (const name of ['owner', 'experimenter', 'operator', 'reader', 'outsider'] as const)
    people[name] = await person(db, name);
  const lab = await createLab(db, people.owner.id, { name: 'Marram Lab' });
  for (const role of ['experimenter', 'operator', 'reader'] as const)
    await addMember(db, lab.id, people.owner.id, { email: people[role].email, role });
  const study = await createStudy(db, lab.id, people.owner.id, { label: 'senses', name: 'Between senses' });
  const { task, document } = await createTask(
    db,
    { lab: lab.id, study: study.id, author: people.owner.id },
    { label: 'lanterns', name: 'Chime and Lantern', tr: 1.5, volumes: 300 }
  );
  return { lab, people, study, task, document };
}
