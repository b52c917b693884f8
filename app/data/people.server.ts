import type { Tx } from "./scope.server.ts";

export interface Person {
  id: string;
  name: string;
  email: string;
  passwordHash: string | null;
  githubId: string | null;
  disabled: boolean;
}

interface PersonRow {
  id: string;
  name: string;
  email: string;
  password_hash: string | null;
  github_id: string | null;
  disabled_at: Date | null;
}

const columns = ["id", "name", "email", "password_hash", "github_id", "disabled_at"] as const;

function toPerson(row: PersonRow): Person {
  return { id: row.id, name: row.name, email: row.email, passwordHash: row.password_hash, githubId: row.github_id, disabled: row.disabled_at !== null };
}

export async function findPersonByEmail(tx: Tx, email: string): Promise<Person | undefined> {
  const row = await tx<PersonRow>("people").select(...columns).whereRaw("lower(email) = lower(?)", [email.trim()]).first();
  return row && toPerson(row);
}

export async function findPerson(tx: Tx, id: string): Promise<Person | undefined> {
  const row = await tx<PersonRow>("people").select(...columns).where({ id }).first();
  return row && toPerson(row);
}

export async function findPersonByGithub(tx: Tx, githubId: string): Promise<Person | undefined> {
  const row = await tx<PersonRow>("people").select(...columns).where({ github_id: githubId }).first();
  return row && toPerson(row);
}

export async function addPerson(tx: Tx, person: { name: string; email: string; passwordHash: string | null }): Promise<string> {
  const [row] = await tx("people").insert({ name: person.name, email: person.email.trim(), password_hash: person.passwordHash }).returning("id");
  return row.id as string;
}

export async function setPasswordHash(tx: Tx, id: string, passwordHash: string): Promise<void> {
  await tx("people").where({ id }).update({ password_hash: passwordHash });
}

export async function setGithub(tx: Tx, id: string, githubId: string): Promise<void> {
  await tx("people").where({ id }).update({ github_id: githubId });
}
