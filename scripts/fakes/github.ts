import { parseArgs } from "node:util";
import demoPeople from "#db/seeds/demo-sign-ins.json" with { type: "json" };
import { startGithubFake } from "./github-fake.ts";
import { portFrom, runUntilTold } from "./run.ts";

await runUntilTold(async () => {
  const { values } = parseArgs({ options: { port: { type: "string" } } });
  const { GITHUB_CLIENT_ID: clientId, GITHUB_CLIENT_SECRET: clientSecret, APP_ORIGIN: appOrigin } = process.env;
  if (!clientId || !clientSecret) throw new Error("GITHUB_CLIENT_ID and GITHUB_CLIENT_SECRET must be set.");
  const { port, stop } = await startGithubFake({ port: portFrom(values.port, "port"), clientId, clientSecret, appOrigin, people: demoPeople.map(({ name, email }) => ({ name, email })) });
  return { says: { port }, stop };
});
