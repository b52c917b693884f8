import type { Knex } from "knex";
import { protect, seal } from "../protect.ts";

const ofRevision = `
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      revision_id uuid not null,`;
const revisionKeys = `
      unique (shop_id, id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id)`;
const signedBy = `
      by_person_id uuid references people (id),
      by_guest_link_id uuid,
      by_name text not null,
      at timestamptz not null default now()`;

export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table prints (${ofRevision}
      ordinal integer not null check (ordinal > 0),
      preset_id uuid,
      preset_name text not null,
      whole boolean not null,
      piece text not null default '',
      file_id uuid,
      model_sha256 text not null,
      scale_x numeric not null default 1,
      scale_y numeric not null default 1,
      scale_z numeric not null default 1,
      printed_on date not null default current_date,
      note text not null default '',
      spoiled text,
      ${signedBy},
      unique (revision_id, ordinal), ${revisionKeys},
      foreign key (shop_id, preset_id) references print_presets (shop_id, id),
      foreign key (shop_id, file_id) references files (shop_id, id)
    );
    comment on column prints.model_sha256 is 'hash of the file it was sliced from';
    comment on column prints.spoiled is 'why it does not count (warped, wrong material), when it does not';

    create table print_proves (
      shop_id uuid not null,
      job_id uuid not null,
      revision_id uuid not null,
      print_id uuid not null,
      characteristic_id uuid not null,
      primary key (shop_id, print_id, characteristic_id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id),
      foreign key (shop_id, print_id) references prints (shop_id, id),
      foreign key (shop_id, characteristic_id) references characteristics (shop_id, id)
    );
    comment on table print_proves is 'what a partial print can prove; a whole print can prove all';

    create table fit_checks (${ofRevision}
      print_id uuid not null,
      mating_part_id uuid not null,
      cause text check (cause in ('design', 'print', 'misread')),
      remarks text not null default '',
      draft_key text not null,
      ${signedBy},
      unique (shop_id, draft_key), ${revisionKeys},
      foreign key (shop_id, print_id) references prints (shop_id, id),
      foreign key (shop_id, mating_part_id) references mating_parts (shop_id, id)
    );
    comment on column fit_checks.draft_key is 'made on the phone; the same draft sent twice is stored once';

    create table fit_results (${ofRevision}
      fit_check_id uuid not null,
      characteristic_id uuid not null,
      readings_mm numeric[] not null default '{}',
      answers boolean[] not null default '{}',
      instrument_id uuid,
      uncertainty_mm numeric,
      band_position_mm numeric,
      band_width_mm numeric check (band_width_mm >= 0),
      unique (shop_id, fit_check_id, characteristic_id), ${revisionKeys},
      foreign key (shop_id, fit_check_id) references fit_checks (shop_id, id),
      foreign key (shop_id, characteristic_id) references characteristics (shop_id, id),
      foreign key (shop_id, instrument_id) references instruments (shop_id, id)
    );
    comment on table fit_results is 'as read; the verdict is computed from them, never stored';
    comment on column fit_results.band_position_mm is 'witness mark: where the band of contact begins, from the datum of the method';

    create table fit_photos (
      shop_id uuid not null,
      job_id uuid not null,
      revision_id uuid not null,
      fit_check_id uuid not null,
      file_id uuid not null,
      characteristic_id uuid,
      created_at timestamptz not null default now(),
      primary key (shop_id, fit_check_id, file_id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id),
      foreign key (shop_id, fit_check_id) references fit_checks (shop_id, id),
      foreign key (shop_id, file_id) references files (shop_id, id),
      foreign key (shop_id, characteristic_id) references characteristics (shop_id, id)
    );

    create table carry_overs (${ofRevision}
      characteristic_id uuid not null,
      from_revision_id uuid not null,
      basis text not null check (basis in ('same-model', 'declared-unchanged', 'computed')),
      reason text not null default '',
      from_model_sha256 text not null,
      model_sha256 text not null,
      distance_mm numeric,
      allowed_mm numeric,
      ${signedBy},
      unique (shop_id, revision_id, characteristic_id), ${revisionKeys},
      foreign key (shop_id, characteristic_id) references characteristics (shop_id, id),
      foreign key (shop_id, from_revision_id) references revisions (shop_id, id)
    );

    create table calculations (${ofRevision}
      kind text not null,
      title text not null,
      inputs jsonb not null,
      result jsonb not null,
      verdict text not null check (verdict in ('pass', 'fail', 'information')),
      model_sha256 text,
      hazard text not null default 'none' check (hazard in ('none', 'pressure', 'burst')),
      removed_at timestamptz,
      ${signedBy}, ${revisionKeys}
    );
    comment on column calculations.model_sha256 is 'the model it was computed for; another model makes it stale';

    create table instructions (
      shop_id uuid not null,
      job_id uuid not null,
      revision_id uuid not null,
      general_tolerance text not null default '',
      datums text not null default '',
      critical_surfaces text not null default '',
      edge_break text not null default '',
      coating text not null default '',
      model_sha256 text not null,
      confirmed_by uuid references people (id),
      confirmed_name text,
      confirmed_at timestamptz,
      row_version integer not null default 1,
      primary key (shop_id, revision_id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id)
    );
    create table instruction_holes (${ofRevision}
      ordinal integer not null,
      label text not null,
      holes integer[] not null,
      treatment text check (treatment in ('tap', 'clearance', 'ream', 'leave')),
      spec text not null default '',
      unique (shop_id, revision_id, ordinal), ${revisionKeys}
    );
    comment on column instruction_holes.holes is 'indices into the holes that the measure of the STEP lists; alike holes stand together';

    create table machinist_replies (${ofRevision}
      model_sha256 text not null,
      price_minor bigint check (price_minor >= 0),
      ready_on date,
      remark text not null default '',
      recorded_how text,
      ${signedBy}, ${revisionKeys}
    );
    comment on column machinist_replies.recorded_how is 'text, call or e-mail, where the shop recorded what the machinist said';
    create table machinist_answers (${ofRevision}
      reply_id uuid not null,
      question_id uuid,
      stance text not null check (stance in ('agree', 'object')),
      text text not null default '',
      closed_by_name text,
      closed_how text,
      closed_at timestamptz, ${revisionKeys},
      foreign key (shop_id, reply_id) references machinist_replies (shop_id, id),
      foreign key (shop_id, question_id) references makeability_questions (shop_id, id),
      check (stance = 'agree' or text <> '')
    );

    create table customer_answers (${ofRevision}
      answer text not null check (answer in ('approved', 'refused', 'reconfirmed')),
      reason text not null default '',
      model_sha256 text not null,
      since_answer_id uuid,
      changes_seen boolean not null default false,
      ${signedBy},
      recorded_how text check (recorded_how in ('text-message', 'e-mail', 'call', 'in-person', 'letter')),
      recorded_by_name text,
      said_on date,
      picture_file_id uuid,
      ${revisionKeys},
      foreign key (shop_id, picture_file_id) references files (shop_id, id),
      foreign key (shop_id, since_answer_id) references customer_answers (shop_id, id),
      check (answer <> 'refused' or reason <> ''),
      check ((recorded_how is null) = (recorded_by_name is null))
    );
    comment on column customer_answers.recorded_how is 'null: the customer''s own click';

    create table callouts (${ofRevision}
      number integer not null,
      file_id uuid,
      x numeric check (x between 0 and 1),
      y numeric check (y between 0 and 1),
      point_mm numeric[],
      visibility text not null check (visibility in ('customer', 'internal')),
      assignee_id uuid references people (id),
      body text not null,
      from_customer boolean not null default false,
      ${signedBy},
      closed_at timestamptz,
      closed_by_name text,
      unique (revision_id, number), ${revisionKeys},
      foreign key (shop_id, file_id) references files (shop_id, id),
      check ((file_id is not null and x is not null and y is not null) or array_length(point_mm, 1) = 3)
    );
    create table callout_replies (${ofRevision}
      callout_id uuid not null,
      body text not null,
      ${signedBy}, ${revisionKeys},
      foreign key (shop_id, callout_id) references callouts (shop_id, id)
    );

    create table caution_reads (${ofRevision}
      caution text not null,
      basis text not null,
      ${signedBy},
      unique (shop_id, revision_id, caution, basis), ${revisionKeys}
    );

    create index fit_checks_print on fit_checks (shop_id, print_id);
    create index calculations_revision on calculations (shop_id, revision_id);
    create index machinist_answers_revision on machinist_answers (shop_id, revision_id);
    create index customer_answers_revision on customer_answers (shop_id, revision_id);
    create index callout_replies_callout on callout_replies (shop_id, callout_id);
    create index fit_photos_file on fit_photos (shop_id, file_id);
  `);
  const sealed = [
    "prints", "print_proves", "fit_checks", "fit_results", "fit_photos", "carry_overs", "calculations",
    "instructions", "instruction_holes", "machinist_replies", "machinist_answers", "customer_answers", "caution_reads",
  ];
  for (const table of sealed) {
    await protect(knex, table, { byJob: true });
    await seal(knex, table);
  }
  // A conversation goes on after release; what the gate saw of it is in the decision.
  for (const table of ["callouts", "callout_replies"]) await protect(knex, table, { byJob: true });
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop table caution_reads, callout_replies, callouts, customer_answers, machinist_answers, machinist_replies, instruction_holes, instructions,
      calculations, carry_overs, fit_photos, fit_results, fit_checks, print_proves, prints cascade;
  `);
}
