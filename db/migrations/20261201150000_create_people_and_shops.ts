import type { Knex } from "knex";
import { protect } from "../protect.ts";

export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create schema scope;
    grant usage on schema scope to spotblue_app;
    comment on schema scope is 'What row-level security asks, and the few doors that look across shops';

    -- A connection that was used before has '' here, and ''::uuid throws: hence nullif.
    create function scope.shop_id() returns uuid language sql stable as
      $$ select nullif(current_setting('app.shop_id', true), '')::uuid $$;
    create function scope.sees_all_jobs() returns boolean language sql stable as
      $$ select coalesce(current_setting('app.job_ids', true), '') = '*' $$;
    create function scope.sees_job(job uuid) returns boolean language sql stable as $$
      select case coalesce(current_setting('app.job_ids', true), '')
        when '' then false
        when '*' then true
        else job = any (current_setting('app.job_ids', true)::uuid[]) end $$;

    create table people (
      id uuid primary key default gen_random_uuid(),
      name text not null,
      email text not null,
      password_hash text,
      github_id text unique,
      created_at timestamptz not null default now(),
      disabled_at timestamptz
    );
    create unique index people_email on people (lower(email));
    comment on table people is 'Accounts; one person can belong to several shops';

    create table shops (
      id uuid primary key default gen_random_uuid(),
      name text not null,
      currency text not null default 'EUR' check (currency ~ '^[A-Z]{3}$'),
      reply_to text,
      created_at timestamptz not null default now(),
      row_version integer not null default 1
    );

    create table memberships (
      shop_id uuid not null references shops (id),
      person_id uuid not null references people (id),
      roles text[] not null check (array_length(roles, 1) > 0 and roles <@ array['owner', 'designer', 'machinist', 'customer']),
      created_at timestamptz not null default now(),
      ended_at timestamptz,
      primary key (shop_id, person_id)
    );
    create index memberships_person on memberships (person_id);

    create table invitations (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null references shops (id),
      email text not null,
      roles text[] not null check (array_length(roles, 1) > 0 and roles <@ array['owner', 'designer', 'machinist', 'customer']),
      token_hash bytea not null unique,
      invited_by uuid not null references people (id),
      created_at timestamptz not null default now(),
      expires_at timestamptz not null,
      accepted_at timestamptz,
      withdrawn_at timestamptz,
      unique (shop_id, id)
    );

    create table sessions (
      id uuid primary key default gen_random_uuid(),
      token_hash bytea not null unique,
      person_id uuid references people (id) on delete cascade,
      guest_link_id uuid,
      shop_id uuid,
      created_at timestamptz not null default now(),
      last_seen_at timestamptz not null default now(),
      proved_at timestamptz not null default now(),
      proved_by text not null check (proved_by in ('password', 'e-mailed code', 'GitHub', 'guest link')),
      expires_at timestamptz not null,
      user_agent text not null default '',
      check (num_nonnulls(person_id, guest_link_id) = 1)
    );
    create index sessions_person on sessions (person_id);
    create index sessions_guest_link on sessions (guest_link_id);
    comment on column sessions.token_hash is 'SHA-256 of the cookie''s token: a stolen table opens nothing';
    comment on column sessions.proved_at is 'last sign-in or re-authentication; a signature asks for less than five minutes';
    comment on column sessions.proved_by is 'the way it was proved, which a signature states';
    comment on column sessions.shop_id is 'the shop this session looks at; null until one is chosen';

    create table sign_in_links (
      id uuid primary key default gen_random_uuid(),
      token_hash bytea not null unique,
      person_id uuid not null references people (id) on delete cascade,
      purpose text not null check (purpose in ('sign-in', 'prove')),
      session_id uuid references sessions (id) on delete cascade,
      created_at timestamptz not null default now(),
      expires_at timestamptz not null,
      used_at timestamptz
    );

    grant select, insert, update on people to spotblue_app;
    grant select, insert, update, delete on sign_in_links to spotblue_app;

    -- Sessions carry a shop_id only as the choice of the person, so that they are found by
    -- their token before any shop is known; they are reached through these doors alone.
    alter table sessions enable row level security;
    alter table sessions force row level security;
    create policy by_owner on sessions to current_user using (true) with check (true);
    create policy in_shop on sessions to public using (shop_id = scope.shop_id() and scope.sees_all_jobs());
    grant select on sessions to spotblue_app;

    create function scope.open_session(hash bytea, person uuid, guest_link uuid, shop uuid, expires timestamptz, agent text, way text)
      returns uuid language sql security definer set search_path = public as
      $$ insert into sessions (token_hash, person_id, guest_link_id, shop_id, expires_at, user_agent, proved_by)
         values (hash, person, guest_link, shop, expires, agent, way) returning id $$;
    create function scope.find_session(hash bytea) returns setof sessions language sql stable security definer set search_path = public as
      $$ select * from sessions where token_hash = hash and expires_at > now() $$;
    create function scope.touch_session(session uuid) returns void language sql security definer set search_path = public as
      $$ update sessions set last_seen_at = now() where id = session and last_seen_at < now() - interval '1 minute' $$;
    create function scope.prove_session(session uuid, way text) returns void language sql security definer set search_path = public as
      $$ update sessions set proved_at = now(), proved_by = way where id = session $$;
    create function scope.choose_shop(session uuid, shop uuid) returns void language sql security definer set search_path = public as
      $$ update sessions set shop_id = shop where id = session $$;
    create function scope.end_session(session uuid, person uuid) returns integer language sql security definer set search_path = public as
      $$ with gone as (delete from sessions where id = session and (person is null or person_id = person) returning 1) select count(*)::integer from gone $$;
    create function scope.end_guest_sessions(guest_link uuid) returns void language sql security definer set search_path = public as
      $$ delete from sessions where guest_link_id = guest_link $$;
    create function scope.sessions_of(person uuid) returns setof sessions language sql stable security definer set search_path = public as
      $$ select * from sessions where person_id = person and expires_at > now() order by last_seen_at desc $$;
    create function scope.sweep_sessions() returns void language sql security definer set search_path = public as
      $$ delete from sessions where expires_at < now() or last_seen_at < now() - interval '8 hours' $$;

    create function scope.memberships_of(person uuid) returns table (shop_id uuid, shop_name text, roles text[])
      language sql stable security definer set search_path = public as
      $$ select m.shop_id, s.name, m.roles from memberships m join shops s on s.id = m.shop_id
         where m.person_id = person and m.ended_at is null order by s.name $$;
    create function scope.invitation_shop(hash bytea) returns uuid language sql stable security definer set search_path = public as
      $$ select shop_id from invitations where token_hash = hash $$;
    create function scope.shop_name(shop uuid) returns text language sql stable security definer set search_path = public as
      $$ select name from shops where id = shop $$;
    create function scope.shop_ids() returns setof uuid language sql stable security definer set search_path = public as
      $$ select id from shops $$;
    create function scope.found_shop(shop_name text, shop_currency text, founder uuid) returns uuid language plpgsql security definer set search_path = public as $$
      declare new_id uuid;
      begin
        insert into shops (name, currency) values (shop_name, shop_currency) returning id into new_id;
        insert into memberships (shop_id, person_id, roles) values (new_id, founder, array['owner', 'designer']);
        return new_id;
      end $$;

    create function scope.refuse_truncate() returns trigger language plpgsql as
      $$ begin raise exception 'sealed: % is never emptied', tg_table_name using errcode = 'restrict_violation'; end $$;
  `);
  await protect(knex, "shops", { openInShop: true });
  await protect(knex, "memberships", { openInShop: true });
  await protect(knex, "invitations");
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop table sign_in_links, sessions, invitations, memberships, shops, people cascade;
    drop schema scope cascade;
  `);
}
