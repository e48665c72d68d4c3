/** The demo lab: made by the application's own code, for trying Ebbline on one's own machine. */
import { randomBytes } from 'node:crypto';
import type { Knex } from 'knex';
import { profileSchema } from '$lib/task/profile';
import { signUp } from '../../auth/accounts';
import { config } from '../../config';
import { ROLES, type Role, type User } from '../../db/rows';
import { refuse } from '../../errors';
import { addMember, createLab } from '../labs';
import { createProfile } from '../profiles';
import { createStudy } from '../studies';
import { insertTask } from '../tasks';
import { chimeAndLantern } from './chime-and-lantern';
import { pressLocaliser } from './press-localiser';

export interface DemoAccount {
  role: Role;
  email: string;
  /** Random; shown this once, kept as a hash only. */
  password: string;
  user: User;
}
export interface DemoLab {
  lab: string;
  study: string;
  /** *Chime and Lantern*. */
  task: string;
  accounts: DemoAccount[];
}

/** Only a server that nobody else can reach offers a demo lab. */
export const isDemoOffered = (): boolean => config().loopback;

export async function createDemoLab(db: Knex): Promise<DemoLab> {
  if (!isDemoOffered())
    refuse(
      403,
      'A demo lab can be opened only where Ebbline listens on this machine alone (HOST=127.0.0.1).'
    );
  const number = await freeNumber(db);
  return db.transaction(async (trx) => {
    const accounts: DemoAccount[] = [];
    for (const role of ROLES) {
      const password = randomBytes(12).toString('base64url');
      const email = emailOf(role, number);
      const name = `${role[0]!.toUpperCase()}${role.slice(1)} of Marram Lab`;
      accounts.push({ role, email, password, user: await signUp(trx, { email, name, password }) });
    }
    const owner = accounts[0]!.user.id;
    const lab = await createLab(trx, owner, { name: 'Marram Lab' }, true);
    for (const { role, email } of accounts.slice(1)) await addMember(trx, lab.id, owner, { email, role });
    const given = profileSchema.parse({
      name: 'Marram scanner',
      tr: 1.5,
      volumes: 300,
      acquisitionTime: 1.4
    });
    const { id: profileId, profile } = await createProfile(trx, lab.id, owner, given);
    const study = await createStudy(trx, lab.id, owner, {
      label: 'senses',
      name: 'Attention between senses'
    });
    const where = { lab: lab.id, study: study.id, author: owner };
    const main = chimeAndLantern(profileId, profile);
    const { task } = await insertTask(trx, where, main.document, main.words);
    const localiser = pressLocaliser(profileId, profile);
    await insertTask(trx, where, localiser.document, localiser.words);
    return { lab: lab.id, study: study.id, task: task.id, accounts };
  });
}

/** Opened again (the passwords were lost), the lab gets accounts of its own: `owner-2@…`. */
const emailOf = (role: Role, number: number) => `${role}${number > 1 ? `-${number}` : ''}@marram.example`;

async function freeNumber(db: Knex): Promise<number> {
  for (let number = 1; ; number++) {
    const taken = await db('users')
      .whereIn(
        'email',
        ROLES.map((role) => emailOf(role, number))
      )
      .first('id');
    if (!taken) return number;
  }
}
