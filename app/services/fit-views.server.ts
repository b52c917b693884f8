import { listCharacteristics, type Characteristic } from "#app/data/characteristics.server.ts";
import { listFitResults, type FitCheck, type FitResult } from "#app/data/fit-checks.server.ts";
import type { Tx } from "#app/data/scope.server.ts";
import { causeWords, fitSentence, judgeOnPrint } from "#app/domain/fit.ts";

/** Fit checks of one part as lists show them; verdicts are worked out from the readings each time. */
export async function viewFitChecks(tx: Tx, partId: string, checks: readonly FitCheck[]) {
  const characteristics = await listCharacteristics(tx, partId, { withSetAside: true });
  const results = await listFitResults(tx, checks.map(({ id }) => id));
  return checks.map((check) => ({
    id: check.id,
    printId: check.printId,
    matingPartName: check.matingPartName,
    byName: check.byName,
    at: check.at,
    cause: check.cause === null ? null : causeWords[check.cause],
    ...fitSentence(results.filter(({ fitCheckId }) => fitCheckId === check.id).map((result) => judgeResult(characteristics, result).verdict)),
  }));
}

export function judgeResult(characteristics: readonly Characteristic[], result: FitResult) {
  return judgeOnPrint(characteristics.find(({ id }) => id === result.characteristicId)!, result);
}
