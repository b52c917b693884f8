import type { GateRecords } from "#app/domain/gate-records.ts";
import { byTime, definingStep, gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";

/**
 * Has the machinist answered every makeability question for this revision's model, and is every
 * objection closed? The last answer to a question decides: an objection that the machinist followed
 * by "agree" is withdrawn. Objections beside the questions are closed one by one.
 */
export function machinistLine(records: GateRecords): Findings {
  const { restsOn, lacks, remark, done } = gatherFindings();
  const step = definingStep(records);
  const asked = records.questions.filter((question) => !question.retired);
  if (asked.length === 0) lacks("no makeability question is put to the machinist", "owner", "put-questions");

  for (const question of asked) {
    restsOn(question.id);
    const last = records.machinistAnswers.filter((answer) => answer.question === question.id).sort(byTime).at(-1);
    if (last === undefined) {
      lacks(`not answered: ${question.text}`, "machinist", "answer-questions", { about: [question.id] });
    } else if (last.stance === "object" && last.closed === null) {
      lacks(`the machinist objects: ${inBrief(last.text, question.text)}`, "designer", "close-objection", { about: [question.id, last.id], failed: true });
    } else if (step === null || last.modelSha256 !== step.sha256) {
      lacks(`answered for another model file: ${question.text}`, "machinist", "answer-questions", { about: [question.id, last.id] });
    } else {
      restsOn(last.id, step.id);
      if (last.closed !== null) remark(`objection closed by ${last.closed.by}: ${last.closed.how}`);
    }
  }

  for (const answer of records.machinistAnswers) {
    if (answer.question === null) {
      if (answer.stance === "object" && answer.closed === null) {
        lacks(`the machinist objects: ${inBrief(answer.text, "no reason given")}`, "designer", "close-objection", { about: [answer.id], failed: true });
      }
    } else if (!records.questions.some((question) => question.id === answer.question)) {
      // An objection could hide here: an incomplete document is never a go.
      lacks("an answer of the machinist names a question that is not among the records", "owner", "put-questions", { about: [answer.id] });
    }
  }
  return done();
}

function inBrief(text: string, otherwise: string): string {
  return text.trim() === "" ? otherwise : text.trim();
}
