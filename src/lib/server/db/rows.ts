/** Rows as PostgreSQL gives them, and what the application calls them. One mapper per table. */
import type { Manifest } from '$lib/task/parts';
import type { Profile } from '$lib/task/profile';

export const ROLES = ['owner', 'experimenter', 'operator', 'reader'] as const;
export type Role = (typeof ROLES)[number];

export interface UserRow {
  id: string;
  email: string;
  name: string;
  password_hash: string;
  created_at: Date;
}
export interface User {
  id: string;
  email: string;
  name: string;
}
export const toUser = (r: Pick<UserRow, 'id' | 'email' | 'name'>): User => ({
  id: r.id,
  email: r.email,
  name: r.name
});

export interface SessionRow {
  id: string;
  user_id: string;
  expires_at: Date;
}
export interface AttemptRow {
  id: string;
  account: string;
  address: string;
  at: Date;
}

export interface LabRow {
  id: string;
  name: string;
  demo: boolean;
  created_at: Date;
}
export interface Lab {
  id: string;
  name: string;
  demo: boolean;
}
export const toLab = (r: LabRow): Lab => ({ id: r.id, name: r.name, demo: r.demo });

export interface MembershipRow {
  lab_id: string;
  user_id: string;
  role: Role;
  deputy: boolean;
  created_at: Date;
}
export interface Member extends User {
  role: Role;
  deputy: boolean;
  since: Date;
}
export const toMember = (r: MembershipRow & Pick<UserRow, 'email' | 'name'>): Member => ({
  id: r.user_id,
  email: r.email,
  name: r.name,
  role: r.role,
  deputy: r.deputy,
  since: r.created_at
});

export interface StudyRow {
  id: string;
  lab_id: string;
  label: string;
  name: string;
  created_at: Date;
  deleted_at: Date | null;
}
export interface Study {
  id: string;
  lab: string;
  label: string;
  name: string;
}
export const toStudy = (r: StudyRow): Study => ({ id: r.id, lab: r.lab_id, label: r.label, name: r.name });

export interface TaskRow {
  id: string;
  lab_id: string;
  study_id: string;
  label: string;
  name: string;
  save_number: number;
  created_at: Date;
  updated_at: Date;
  deleted_at: Date | null;
}
export interface Task {
  id: string;
  lab: string;
  study: string;
  label: string;
  name: string;
  saveNumber: number;
  updatedAt: Date;
}
export const toTask = (r: TaskRow): Task => ({
  id: r.id,
  lab: r.lab_id,
  study: r.study_id,
  label: r.label,
  name: r.name,
  saveNumber: r.save_number,
  updatedAt: r.updated_at
});

export interface PartRow {
  lab_id: string;
  hash: string;
  body: string;
}
export interface SaveRow {
  lab_id: string;
  task_id: string;
  number: number;
  manifest: Manifest;
  author: string | null;
  words: string[];
  saved_at: Date;
}
export interface Save {
  number: number;
  author: string | null;
  words: string[];
  savedAt: Date;
}

export interface AssetRow {
  lab_id: string;
  sha256: string;
  mime: string;
  size: number;
  name: string;
  note: string;
  redistributable: boolean;
  uploaded_by: string | null;
  created_at: Date;
}
export interface Asset {
  sha256: string;
  mime: string;
  /** Bytes. */
  size: number;
  name: string;
  note: string;
  redistributable: boolean;
}
export const toAsset = (r: AssetRow): Asset => ({
  sha256: r.sha256,
  mime: r.mime,
  size: r.size,
  name: r.name,
  note: r.note,
  redistributable: r.redistributable
});

export interface ProfileRow {
  id: string;
  lab_id: string;
  name: string;
  version: number;
  created_at: Date;
}
export interface ProfileVersionRow {
  lab_id: string;
  profile_id: string;
  version: number;
  hash: string;
  body: unknown;
  author: string | null;
  saved_at: Date;
}
export interface StoredProfile {
  id: string;
  version: number;
  hash: string;
  savedAt: Date;
  profile: Profile;
}

export interface RevisionRow {
  id: string;
  lab_id: string;
  task_id: string;
  hash: string;
  save_number: number;
  snapshot: string;
  sealed_by: string | null;
  sealed_at: Date;
}
export interface Revision {
  id: string;
  hash: string;
  saveNumber: number;
  sealedAt: Date;
}
export const toRevision = (r: Omit<RevisionRow, 'snapshot'>): Revision => ({
  id: r.id,
  hash: r.hash,
  saveNumber: r.save_number,
  sealedAt: r.sealed_at
});

export interface RehearsalRow {
  id: string;
  lab_id: string;
  task_id: string;
  save_number: number;
  run_id: string;
  author: string | null;
  report: unknown;
  created_at: Date;
}
