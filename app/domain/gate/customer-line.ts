import type { GateRecords } from "#app/domain/gate-records.ts";
import { byTime, definingStep, gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";
import { hasVerifiedPhoto } from "#app/domain/gate/carry-over.ts";

type Answer = GateRecords["customerAnswers"][number];

/**
 * Has the customer approved this revision's model, or reconfirmed after seeing what changed since
 * their approval, and is none of their callouts open? The last answer decides.
 */
export function customerLine(records: GateRecords): Findings {
  const { restsOn, lacks, remark, done } = gatherFindings();
  const step = definingStep(records);
  const last = [...records.customerAnswers].sort(byTime).at(-1);
  if (last === undefined) {
    lacks("the customer has not answered yet", "customer", "answer-customer");
  } else if (last.answer === "refused") {
    lacks(`the customer refused${last.reason ? `: ${last.reason}` : ""}`, "designer", "make-revision", { about: [last.id], failed: true });
  } else if (step === null || last.modelSha256 !== step.sha256) {
    lacks("the customer approved another model file and has to reconfirm after seeing what changed", "customer", "answer-customer", { about: [last.id] });
  } else {
    restsOn(last.id, step.id);
    if (last.answer === "reconfirmed") checkReconfirmation(last);
    if (last.recorded !== null) checkRecorded(last, last.recorded);
  }

  for (const callout of records.callouts) {
    if (callout.byCustomer && callout.open) {
      lacks(`a callout of the customer is open: ${callout.text}`, "designer", "close-callout", { about: [callout.id] });
    }
  }
  return done();

  function checkReconfirmation(answer: Answer): void {
    const before = records.customerAnswers.find((one) => one.id === answer.since?.answer);
    const about = { about: [answer.id] };
    if (before === undefined || before.answer === "refused" || byTime(before, answer) >= 0) {
      lacks("the customer reconfirmed, but no approval from before is among the records", "customer", "answer-customer", about);
      return;
    }
    restsOn(before.id);
    if (!answer.since!.changesSeen) lacks("the customer reconfirmed without seeing what changed since the approval", "customer", "answer-customer", about);
  }

  function checkRecorded(answer: Answer, recorded: NonNullable<Answer["recorded"]>): void {
    remark(`recorded by ${recorded.by}, ${howInWords[recorded.how]} of ${recorded.on}; not the customer's own click`);
    const written = recorded.how === "text-message" || recorded.how === "letter";
    if (recorded.picture !== null) {
      restsOn(recorded.picture);
      if (!hasVerifiedPhoto(records, [recorded.picture])) lacks("the picture of the customer's answer is not stored", "designer", "ask-customer", { about: [answer.id] });
    } else if (written) {
      lacks(`the picture of the customer's ${recorded.how === "letter" ? "letter" : "text message"} is missing`, "designer", "ask-customer", { about: [answer.id] });
    }
  }
}

const howInWords = {
  "text-message": "from a text message",
  "e-mail": "from an e-mail",
  call: "from a call",
  "in-person": "from a talk in person",
  letter: "from a letter",
};
