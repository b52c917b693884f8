import type { Knex } from "knex";
import { protect } from "../protect.ts";

const edited = `
  created_at timestamptz not null default now(),
  set_aside_at timestamptz,
  row_version integer not null default 1`;

export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table customers (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null references shops (id),
      name text not null,
      email text,
      phone text,
      note text not null default '',
      person_id uuid references people (id),
      ${edited},
      unique (shop_id, id)
    );
    comment on column customers.person_id is 'the account this customer signs in with, where there is one';

    create table materials (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null references shops (id),
      code text not null,
      name text not null,
      density_kg_m3 numeric not null check (density_kg_m3 > 0),
      yield_mpa numeric check (yield_mpa > 0),
      tensile_mpa numeric check (tensile_mpa > 0),
      shear_mpa numeric check (shear_mpa > 0),
      typical boolean not null default true,
      source text not null default '',
      ${edited},
      unique (shop_id, id), unique (shop_id, code)
    );
    comment on column materials.typical is 'true: typical values; false: minimums of a standard';

    create table instruments (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null references shops (id),
      name text not null,
      kind text not null,
      resolution_mm numeric not null check (resolution_mm > 0),
      uncertainty_mm numeric not null check (uncertainty_mm > 0),
      trust text not null check (trust in ('calibrated', 'checked', 'unverified')),
      calibrated_until date,
      checked_on date,
      checked_with text not null default '',
      ${edited},
      unique (shop_id, id),
      check (trust <> 'calibrated' or calibrated_until is not null),
      check (trust <> 'checked' or checked_on is not null)
    );
    comment on column instruments.uncertainty_mm is 'expanded uncertainty U (k = 2), half width';

    create table printers (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null references shops (id),
      name text not null,
      process text not null,
      bed_mm text not null default '',
      ${edited},
      unique (shop_id, id)
    );

    create table print_presets (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      printer_id uuid not null,
      name text not null,
      material text not null,
      layer_mm numeric not null check (layer_mm > 0),
      walls integer not null check (walls > 0),
      infill_pct numeric not null check (infill_pct between 0 and 100),
      scale_x numeric not null default 1 check (scale_x > 0),
      scale_y numeric not null default 1 check (scale_y > 0),
      scale_z numeric not null default 1 check (scale_z > 0),
      note text not null default '',
      ${edited},
      unique (shop_id, id),
      foreign key (shop_id, printer_id) references printers (shop_id, id)
    );

    create table makeability_questions (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null references shops (id),
      question text not null,
      sort integer not null default 0,
      ${edited},
      unique (shop_id, id)
    );

    create table jobs (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null references shops (id),
      job_id uuid generated always as (id) stored,
      number text not null,
      customer_id uuid not null,
      title text not null,
      due_on date,
      promise text not null default '',
      deposit_agreed_minor bigint check (deposit_agreed_minor >= 0),
      deposit_none_reason text,
      ${edited},
      unique (shop_id, id), unique (shop_id, number),
      foreign key (shop_id, customer_id) references customers (shop_id, id)
    );
    comment on column jobs.job_id is 'its own id, so that the one policy for rows of a job fits here too';
    comment on column jobs.deposit_agreed_minor is 'in minor units of the shop''s currency; null: not agreed yet';
    comment on column jobs.deposit_none_reason is 'why the owner asks for no deposit';

    create table payments (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      amount_minor bigint not null check (amount_minor <> 0),
      paid_on date not null,
      how text not null,
      note text not null default '',
      recorded_by uuid references people (id),
      created_at timestamptz not null default now(),
      unique (shop_id, id),
      foreign key (shop_id, job_id) references jobs (shop_id, id)
    );

    create table job_shares (
      shop_id uuid not null,
      job_id uuid not null,
      person_id uuid not null references people (id),
      created_at timestamptz not null default now(),
      primary key (shop_id, job_id, person_id),
      foreign key (shop_id, job_id) references jobs (shop_id, id)
    );
    comment on table job_shares is 'jobs a machinist with an account may see';

    create table guest_links (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      role text not null check (role in ('customer', 'machinist')),
      name text not null,
      email text not null,
      token_hash bytea not null unique,
      created_by uuid references people (id),
      created_at timestamptz not null default now(),
      expires_at timestamptz not null,
      exchanged_at timestamptz,
      ended_at timestamptz,
      unique (shop_id, id),
      foreign key (shop_id, job_id) references jobs (shop_id, id)
    );
    alter table sessions add foreign key (guest_link_id) references guest_links (id) on delete cascade;
    create function scope.guest_link_shop(hash bytea) returns uuid language sql stable security definer set search_path = public as
      $$ select shop_id from guest_links where token_hash = hash $$;
    create function scope.guest_link(link uuid) returns setof guest_links language sql stable security definer set search_path = public as
      $$ select * from guest_links where id = link and ended_at is null $$;

    -- Jobs that somebody who is kept to jobs may see: as customer the own ones, as machinist the shared ones.
    create function scope.jobs_of(shop uuid, person uuid, held text[]) returns uuid[] language sql stable security definer set search_path = public as $$
      select coalesce(array_agg(distinct j.id), '{}') from jobs j
      join customers c on c.id = j.customer_id
      where j.shop_id = shop and (
        ('customer' = any (held) and c.person_id = person) or
        ('machinist' = any (held) and exists (select 1 from job_shares s where s.job_id = j.id and s.person_id = person)))
    $$;

    create table mating_parts (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      name text not null,
      description text not null default '',
      came_in_on date,
      condition_in text not null default '',
      went_out_on date,
      condition_out text not null default '',
      ${edited},
      unique (shop_id, id),
      foreign key (shop_id, job_id) references jobs (shop_id, id)
    );

    create table measurements (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      mating_part_id uuid not null,
      name text not null,
      value_mm numeric not null,
      instrument_id uuid,
      uncertainty_mm numeric check (uncertainty_mm >= 0),
      note text not null default '',
      measured_by uuid references people (id),
      measured_on date not null default current_date,
      ${edited},
      unique (shop_id, id),
      foreign key (shop_id, mating_part_id) references mating_parts (shop_id, id),
      foreign key (shop_id, instrument_id) references instruments (shop_id, id)
    );
    comment on table measurements is 'what was measured on a mating part, as read';

    create table parts (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      number text not null,
      name text not null,
      kit text not null default 'plate',
      material_id uuid,
      quantity integer not null default 1 check (quantity > 0),
      required_lines text[] not null,
      required_calculations jsonb not null default '[]',
      speed_rpm numeric check (speed_rpm >= 0),
      pressure_mpa numeric check (pressure_mpa >= 0),
      temperature_c numeric,
      fluid text,
      lifting boolean not null default false,
      ${edited},
      unique (shop_id, id), unique (shop_id, number),
      foreign key (shop_id, job_id) references jobs (shop_id, id),
      foreign key (shop_id, material_id) references materials (shop_id, id)
    );

    create table characteristics (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      part_id uuid not null,
      mating_part_id uuid,
      name text not null,
      kind text not null check (kind in ('limits', 'fit', 'min', 'max', 'yes-no')),
      nominal_mm numeric,
      lower_mm numeric,
      upper_mm numeric,
      fit_class text,
      print_lower_mm numeric,
      print_upper_mm numeric,
      question text not null default '',
      method text not null default '',
      places integer not null default 1 check (places between 1 and 50),
      required boolean not null default true,
      critical boolean not null default false,
      photo_required boolean not null default false,
      provable_on_print boolean not null default true,
      sort integer not null default 0,
      ${edited},
      unique (shop_id, id),
      foreign key (shop_id, part_id) references parts (shop_id, id),
      foreign key (shop_id, mating_part_id) references mating_parts (shop_id, id),
      check (kind <> 'yes-no' or question <> ''),
      check (lower_mm is null or upper_mm is null or lower_mm <= upper_mm),
      check (print_lower_mm is null or print_upper_mm is null or print_lower_mm <= print_upper_mm)
    );

    create index jobs_customer on jobs (shop_id, customer_id);
    create index payments_job on payments (shop_id, job_id);
    create index guest_links_job on guest_links (shop_id, job_id);
    create index mating_parts_job on mating_parts (shop_id, job_id);
    create index measurements_mating_part on measurements (shop_id, mating_part_id);
    create index parts_job on parts (shop_id, job_id);
    create index characteristics_part on characteristics (shop_id, part_id);
  `);
  for (const table of ["materials", "makeability_questions", "instruments", "printers", "print_presets"]) await protect(knex, table, { openInShop: true });
  await protect(knex, "customers");
  for (const table of ["jobs", "payments", "job_shares", "guest_links", "mating_parts", "measurements", "parts", "characteristics"]) {
    await protect(knex, table, { byJob: true });
  }
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    alter table sessions drop constraint sessions_guest_link_id_fkey;
    drop table characteristics, parts, measurements, mating_parts, guest_links, job_shares, payments, jobs,
      makeability_questions, print_presets, printers, instruments, materials, customers cascade;
    drop function scope.guest_link_shop(bytea);
    drop function scope.jobs_of(uuid, uuid, text[]);
  `);
}
