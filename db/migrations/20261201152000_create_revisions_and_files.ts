import type { Knex } from "knex";
import { protect, seal } from "../protect.ts";

export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table revisions (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      part_id uuid not null,
      ordinal integer not null check (ordinal > 0),
      parent_id uuid,
      branch_name text,
      reason text not null,
      author_id uuid references people (id),
      author_name text not null,
      created_at timestamptz not null default now(),
      shared_at timestamptz,
      set_aside_at timestamptz,
      set_aside_reason text,
      sealed_at timestamptz,
      row_version integer not null default 1,
      unique (shop_id, id), unique (part_id, ordinal),
      foreign key (shop_id, part_id) references parts (shop_id, id),
      foreign key (shop_id, parent_id) references revisions (shop_id, id),
      check ((set_aside_at is null) = (set_aside_reason is null))
    );
    comment on column revisions.sealed_at is 'set by a release; from then on nothing that the decision rests on can change';
    comment on column revisions.shared_at is 'when the customer was shown it; null: not shown';

    create table files (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      kind text not null check (kind in ('step', 'stl', 'photo', 'pdf')),
      name text not null,
      key text not null unique,
      upload_id text,
      part_bytes integer,
      bytes bigint not null check (bytes > 0),
      sha256 text not null check (sha256 ~ '^[0-9a-f]{64}$'),
      media_type text not null,
      unit text check (unit in ('mm', 'in')),
      state text not null default 'uploading' check (state in ('uploading', 'checking', 'stored', 'refused', 'abandoned')),
      refusal text,
      progress numeric not null default 0,
      target jsonb not null,
      uploaded_by uuid references people (id),
      uploaded_by_name text not null,
      created_at timestamptz not null default now(),
      stored_at timestamptz,
      unique (shop_id, id),
      foreign key (shop_id, job_id) references jobs (shop_id, id)
    );
    comment on column files.sha256 is 'stated by the browser, and verified against the stored bytes before state becomes stored';
    comment on column files.unit is 'unit of an STL, which states none itself';
    comment on column files.target is 'what the file is for: {"to": "revision", "id": …}; linked when it is stored';

    create table measures (
      shop_id uuid not null,
      job_id uuid not null,
      file_id uuid not null,
      state text not null default 'waiting' check (state in ('waiting', 'running', 'done', 'failed')),
      progress numeric not null default 0,
      step text not null default '',
      document jsonb,
      reason text,
      finished_at timestamptz,
      primary key (shop_id, file_id),
      foreign key (shop_id, file_id) references files (shop_id, id)
    );
    comment on column measures.document is 'the document of the command line''s measure';
    comment on column measures.reason is 'why the model can not be read, for a person';

    create table derived_files (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      file_id uuid not null,
      kind text not null check (kind in ('view-mesh', 'customer-mesh', 'thumbnail', 'screen')),
      key text not null,
      bytes bigint not null,
      sha256 text not null,
      media_type text not null,
      width integer,
      height integer,
      detail jsonb not null default '{}',
      created_at timestamptz not null default now(),
      unique (shop_id, file_id, kind),
      foreign key (shop_id, file_id) references files (shop_id, id)
    );

    create table revision_files (
      shop_id uuid not null,
      job_id uuid not null,
      revision_id uuid not null,
      file_id uuid not null,
      role text not null check (role in ('step', 'stl', 'photo', 'drawing')),
      created_at timestamptz not null default now(),
      removed_at timestamptz,
      primary key (shop_id, revision_id, file_id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id),
      foreign key (shop_id, file_id) references files (shop_id, id)
    );
    comment on column revision_files.removed_at is 'replaced or taken out before release; the file itself is kept';

    create table mating_part_photos (
      shop_id uuid not null,
      job_id uuid not null,
      mating_part_id uuid not null,
      file_id uuid not null,
      created_at timestamptz not null default now(),
      primary key (shop_id, mating_part_id, file_id),
      foreign key (shop_id, mating_part_id) references mating_parts (shop_id, id),
      foreign key (shop_id, file_id) references files (shop_id, id)
    );

    create table file_seals (
      shop_id uuid not null,
      job_id uuid not null,
      file_id uuid not null,
      revision_id uuid not null,
      primary key (shop_id, file_id, revision_id),
      foreign key (shop_id, file_id) references files (shop_id, id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id)
    );
    comment on table file_seals is 'files that a release rests on: neither they nor their measures change again';

    create table logbook (
      shop_id uuid not null references shops (id),
      seq bigint not null check (seq > 0),
      at timestamptz not null,
      actor_id uuid,
      actor text not null,
      action text not null,
      subject_type text not null,
      subject_id uuid,
      job_id uuid,
      detail jsonb not null default '{}',
      previous_hash text not null,
      hash text not null,
      primary key (shop_id, seq)
    );
    create index logbook_job on logbook (shop_id, job_id, seq desc);
    comment on table logbook is 'everything that happened; each entry is chained to the one before by its hash';

    create function scope.logbook_head(shop uuid) returns table (seq bigint, hash text) language sql stable security definer set search_path = public as
      $$ select seq, hash from logbook where shop_id = shop order by seq desc limit 1 $$;

    -- Sealed for the app's role only in effect: nobody who is not the tables' owner can switch triggers off.
    create function scope.refuse_when_sealed() returns trigger language plpgsql security definer set search_path = public as $$
      declare touched uuid;
      begin
        foreach touched in array array_remove(array[
          case when tg_op <> 'DELETE' then (to_jsonb(new) ->> 'revision_id')::uuid end,
          case when tg_op <> 'INSERT' then (to_jsonb(old) ->> 'revision_id')::uuid end], null)
        loop
          if exists (select 1 from revisions r where r.id = touched and r.sealed_at is not null) then
            raise exception 'sealed: revision % was released, its % can not change', touched, tg_table_name using errcode = 'restrict_violation';
          end if;
        end loop;
        return case when tg_op = 'DELETE' then old else new end;
      end $$;

    create function scope.refuse_sealed_revision() returns trigger language plpgsql as $$
      begin
        if old.sealed_at is not null then
          raise exception 'sealed: revision % was released and can not change', old.id using errcode = 'restrict_violation';
        end if;
        return case when tg_op = 'DELETE' then old else new end;
      end $$;

    create function scope.refuse_sealed_file() returns trigger language plpgsql security definer set search_path = public as $$
      declare touched uuid;
      begin
        touched := case when tg_op = 'INSERT' then (to_jsonb(new) ->> 'file_id')::uuid
          else coalesce((to_jsonb(old) ->> 'file_id')::uuid, (to_jsonb(old) ->> 'id')::uuid) end;
        if exists (select 1 from file_seals s where s.file_id = touched) then
          raise exception 'sealed: file % belongs to a released revision', touched using errcode = 'restrict_violation';
        end if;
        return case when tg_op = 'DELETE' then old else new end;
      end $$;

    create trigger revisions_sealed before update or delete on revisions for each row execute function scope.refuse_sealed_revision();
    create trigger revisions_no_truncate before truncate on revisions for each statement execute function scope.refuse_truncate();
    create trigger files_sealed before update or delete on files for each row execute function scope.refuse_sealed_file();
    create trigger files_no_truncate before truncate on files for each statement execute function scope.refuse_truncate();
    create trigger measures_sealed before insert or update or delete on measures for each row execute function scope.refuse_sealed_file();
    create trigger measures_no_truncate before truncate on measures for each statement execute function scope.refuse_truncate();
    create trigger file_seals_no_truncate before truncate on file_seals for each statement execute function scope.refuse_truncate();
    create trigger logbook_no_truncate before truncate on logbook for each statement execute function scope.refuse_truncate();

    create index revisions_part on revisions (shop_id, part_id);
    create index files_job on files (shop_id, job_id);
    create index files_waiting on files (state, created_at) where state in ('uploading', 'checking');
    create index revision_files_file on revision_files (shop_id, file_id);
    create index mating_part_photos_file on mating_part_photos (shop_id, file_id);
  `);
  for (const table of ["revisions", "files", "measures", "derived_files", "revision_files", "mating_part_photos"]) await protect(knex, table, { byJob: true });
  await protect(knex, "file_seals", { byJob: true, appendOnly: true });
  await protect(knex, "logbook", { appendOnly: true });
  // People kept to their jobs act too, and what they do is entered; they read nothing of it.
  await knex.raw(`create policy entered on logbook for insert to public with check (shop_id = scope.shop_id())`);
  await seal(knex, "revision_files");
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop table logbook, file_seals, mating_part_photos, revision_files, derived_files, measures, files, revisions cascade;
    drop function scope.logbook_head(uuid);
    drop function scope.refuse_when_sealed();
    drop function scope.refuse_sealed_revision();
    drop function scope.refuse_sealed_file();
  `);
}
