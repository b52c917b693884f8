import { parseArgs } from "node:util";
import { startMailCatcher } from "./mail-catcher.ts";
import { portFrom, runUntilTold } from "./run.ts";

await runUntilTold(async () => {
  const { values } = parseArgs({ options: { "smtp-port": { type: "string" }, "web-port": { type: "string" }, dir: { type: "string" } } });
  if (!values.dir) throw new Error("--dir must name the folder to keep the mails in.");
  const { smtpPort, webPort, stop } = await startMailCatcher({ smtpPort: portFrom(values["smtp-port"], "smtp-port"), webPort: portFrom(values["web-port"], "web-port"), dir: values.dir });
  return { says: { smtpPort, webPort }, stop };
});
