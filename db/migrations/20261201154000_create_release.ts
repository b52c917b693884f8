import type { Knex } from "knex";
import { protect, seal } from "../protect.ts";

export async function up(knex: Knex): Promise<void> {
  await knex.raw(`
    create table proposals (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      revision_id uuid not null,
      by_person_id uuid not null references people (id),
      by_name text not null,
      meaning text not null,
      proved_by text not null,
      at timestamptz not null default now(),
      withdrawn_at timestamptz,
      unique (shop_id, id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id)
    );
    create unique index proposals_open on proposals (revision_id) where withdrawn_at is null;
    comment on table proposals is 'a revision put to the gate, signed; withdrawn by a no-go or by who put it there';

    create table decisions (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      part_id uuid not null,
      revision_id uuid not null,
      decision text not null check (decision in ('go', 'no-go', 'go with concession')),
      reason text not null default '',
      letter text,
      rule_version text not null,
      records_hash text not null,
      records jsonb not null,
      lines jsonb not null,
      manifest jsonb,
      proposal_id uuid,
      proposed_name text,
      proposed_at timestamptz,
      by_person_id uuid not null references people (id),
      by_name text not null,
      meaning text not null,
      same_person boolean not null,
      at timestamptz not null default now(),
      unique (shop_id, id),
      foreign key (shop_id, part_id) references parts (shop_id, id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id),
      foreign key (shop_id, proposal_id) references proposals (shop_id, id),
      check (decision <> 'no-go' or reason <> ''),
      check ((decision = 'no-go') = (letter is null)),
      check ((decision = 'no-go') = (manifest is null))
    );
    create unique index decisions_letter on decisions (part_id, letter) where letter is not null;
    create unique index decisions_release on decisions (revision_id) where letter is not null;

    create table concessions (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      revision_id uuid not null,
      lines text[] not null check (array_length(lines, 1) > 0),
      reason text not null check (reason <> ''),
      limit_pieces integer check (limit_pieces > 0),
      limit_until date,
      outside_approval jsonb,
      by_person_id uuid not null references people (id),
      by_name text not null,
      at timestamptz not null default now(),
      withdrawn_at timestamptz,
      unique (shop_id, id),
      foreign key (shop_id, revision_id) references revisions (shop_id, id),
      check (num_nonnulls(limit_pieces, limit_until) >= 1)
    );

    create table packets (
      shop_id uuid not null,
      job_id uuid not null,
      decision_id uuid not null,
      state text not null default 'being made' check (state in ('being made', 'ready')),
      attempts integer not null default 0,
      last_error text,
      key text,
      sha256 text,
      bytes bigint,
      pdf_key text,
      made_at timestamptz,
      primary key (shop_id, decision_id),
      foreign key (shop_id, decision_id) references decisions (shop_id, id)
    );

    create table packet_fetches (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      decision_id uuid not null,
      by_person_id uuid references people (id),
      by_guest_link_id uuid,
      by_name text not null,
      by_email text,
      at timestamptz not null default now(),
      unique (shop_id, id),
      foreign key (shop_id, decision_id) references decisions (shop_id, id)
    );

    create table acknowledgements (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      decision_id uuid not null,
      correction_id uuid,
      recall_id uuid,
      by_person_id uuid references people (id),
      by_guest_link_id uuid,
      by_name text not null,
      at timestamptz not null default now(),
      unique (shop_id, id),
      foreign key (shop_id, decision_id) references decisions (shop_id, id)
    );

    create table corrections (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      decision_id uuid not null,
      text text not null check (text <> ''),
      by_person_id uuid not null references people (id),
      by_name text not null,
      at timestamptz not null default now(),
      unique (shop_id, id),
      foreign key (shop_id, decision_id) references decisions (shop_id, id)
    );

    create table recalls (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid not null,
      job_id uuid not null,
      decision_id uuid not null unique,
      reason text not null check (reason <> ''),
      by_person_id uuid not null references people (id),
      by_name text not null,
      at timestamptz not null default now(),
      unique (shop_id, id),
      foreign key (shop_id, decision_id) references decisions (shop_id, id)
    );
    alter table acknowledgements
      add foreign key (shop_id, correction_id) references corrections (shop_id, id),
      add foreign key (shop_id, recall_id) references recalls (shop_id, id);

    create table mail_outbox (
      id uuid primary key default gen_random_uuid(),
      shop_id uuid references shops (id),
      once_key text not null unique,
      to_address text not null,
      reply_to text,
      subject text not null,
      text_body text not null,
      html_body text not null,
      created_at timestamptz not null default now(),
      attempts integer not null default 0,
      last_error text,
      sent_at timestamptz
    );
    comment on column mail_outbox.once_key is 'names the event and the person: the same mail is never queued twice';
    comment on column mail_outbox.shop_id is 'null: mail to a person about the own account';
    create index mail_outbox_unsent on mail_outbox (created_at) where sent_at is null;

    -- The sender works across shops and for people without one; bodies hold links, so that the app's
    -- role adds mails and reads only those of its shop.
    create function scope.queue_mail(shop uuid, once text, recipient text, reply text, mail_subject text, body_text text, body_html text)
      returns uuid language sql security definer set search_path = public as
      $$ insert into mail_outbox (shop_id, once_key, to_address, reply_to, subject, text_body, html_body)
         values (shop, once, recipient, reply, mail_subject, body_text, body_html)
         on conflict (once_key) do nothing returning id $$;
    create function scope.take_mail(mail uuid) returns setof mail_outbox language sql security definer set search_path = public as
      $$ select * from mail_outbox where id = mail and sent_at is null for update $$;
    create function scope.mail_sent(mail uuid) returns void language sql security definer set search_path = public as
      $$ update mail_outbox set sent_at = now(), attempts = attempts + 1, last_error = null where id = mail $$;
    create function scope.mail_failed(mail uuid, error text) returns void language sql security definer set search_path = public as
      $$ update mail_outbox set attempts = attempts + 1, last_error = error where id = mail $$;

    create index decisions_revision on decisions (shop_id, revision_id);
    create index concessions_revision on concessions (shop_id, revision_id);
    create index packet_fetches_decision on packet_fetches (shop_id, decision_id);
    create index acknowledgements_decision on acknowledgements (shop_id, decision_id);
    create index corrections_decision on corrections (shop_id, decision_id);
  `);
  for (const table of ["proposals", "concessions"]) {
    await protect(knex, table, { byJob: true });
    await seal(knex, table);
  }
  await protect(knex, "decisions", { byJob: true, appendOnly: true });
  await seal(knex, "decisions");
  await protect(knex, "packets", { byJob: true });
  for (const table of ["packet_fetches", "acknowledgements", "corrections", "recalls"]) await protect(knex, table, { byJob: true, appendOnly: true });
  await protect(knex, "mail_outbox");
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw(`
    drop function scope.take_mail(uuid);
    drop table mail_outbox, recalls, corrections, acknowledgements, packet_fetches, packets, concessions, decisions, proposals cascade;
    drop function scope.queue_mail(uuid, text, text, text, text, text, text);
    drop function scope.mail_sent(uuid);
    drop function scope.mail_failed(uuid, text);
  `);
}
