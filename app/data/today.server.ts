import type { Tx } from "./scope.server.ts";

export interface WaitingRevision {
  revisionId: string;
  jobId: string;
  partName: string;
  ordinal: number;
  reason: string;
  createdAt: Date;
  dueOn: string | null;
  fileId: string | null;
  hasModel: boolean;
  shared: boolean;
  proposedAt: Date | null;
  proposedBy: string | null;
  answeredByMachinist: boolean;
  answeredByCustomer: boolean;
}

export interface WaitingPacket {
  decisionId: string;
  partName: string;
  letter: string;
  at: Date;
  fileId: string | null;
  /** Ids of the people and guest links that acknowledged it. */
  acknowledged: string[];
}

const picture = `(select rf.file_id from revision_files rf where rf.revision_id = r.id and rf.role = 'step' and rf.removed_at is null limit 1)`;
const modelHash = `(select f.sha256 from revision_files rf join files f on f.id = rf.file_id where rf.revision_id = r.id and rf.role = 'step' and rf.removed_at is null limit 1)`;

/** The newest revision of every part under way, and the packets that were released, in two queries. */
export async function listWaiting(tx: Tx): Promise<{ revisions: WaitingRevision[]; packets: WaitingPacket[] }> {
  const { rows: revisions } = await tx.raw<{ rows: WaitingRevision[] }>(`
    select r.id as "revisionId", r.job_id as "jobId", p.name as "partName", r.ordinal, r.reason, r.created_at as "createdAt", to_char(j.due_on, 'YYYY-MM-DD') as "dueOn",
      ${picture} as "fileId", ${modelHash} is not null as "hasModel", r.shared_at is not null as shared, pr.at as "proposedAt", pr.by_name as "proposedBy",
      exists (select 1 from machinist_replies m where m.revision_id = r.id and m.model_sha256 = ${modelHash}) as "answeredByMachinist",
      exists (select 1 from customer_answers a where a.revision_id = r.id and a.model_sha256 = ${modelHash}) as "answeredByCustomer"
    from parts p join jobs j on j.id = p.job_id
    join lateral (select * from revisions r where r.part_id = p.id and r.set_aside_at is null order by r.ordinal desc limit 1) r on true
    left join proposals pr on pr.revision_id = r.id and pr.withdrawn_at is null
    where p.set_aside_at is null and j.set_aside_at is null and r.sealed_at is null
    order by coalesce(pr.at, r.created_at)`);
  const { rows: packets } = await tx.raw<{ rows: WaitingPacket[] }>(`
    select d.id as "decisionId", p.name as "partName", d.letter, d.at, ${picture} as "fileId",
      (select coalesce(array_agg(coalesce(a.by_person_id, a.by_guest_link_id)::text), '{}') from acknowledgements a where a.decision_id = d.id and a.correction_id is null and a.recall_id is null) as acknowledged
    from decisions d join parts p on p.id = d.part_id join revisions r on r.id = d.revision_id
    join packets k on k.decision_id = d.id where k.state = 'ready' order by d.at`);
  return { revisions, packets };
}
