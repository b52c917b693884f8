import { parseArgs } from "node:util";
import { startFakeStore } from "./server.ts";

/** Ends with the clear line that a person needs, and no stack. */
function refuse(message: string): never {
  console.error(message);
  process.exit(2);
}

const { values } = parseArgs({ options: { port: { type: "string", default: "4610" }, dir: { type: "string" }, "take-faults": { type: "boolean", default: false } } });
const { S3_ACCESS_KEY_ID: accessKeyId, S3_SECRET_ACCESS_KEY: secretAccessKey, S3_REGION: region = "us-east-1" } = process.env;
const port = Number(values.port);
if (!values.dir) refuse("--dir must name the folder to keep the files in.");
if (!Number.isInteger(port) || port < 0 || port > 65_535) refuse(`--port must be a number from 0 to 65535, not ${values.port}.`);
if (!accessKeyId || !secretAccessKey) refuse("S3_ACCESS_KEY_ID and S3_SECRET_ACCESS_KEY must be set.");

try {
  const store = await startFakeStore({ port, dir: values.dir, accessKeyId, secretAccessKey, region, faultsByRequest: values["take-faults"] });
  console.log(JSON.stringify({ ready: true, port: store.port }));
  let stopping = false;
  const stop = () => {
    if (stopping) return;
    stopping = true;
    void store.stop().then(() => process.exit(0));
  };
  process.on("SIGTERM", stop);
  process.on("SIGINT", stop);
} catch (error) {
  refuse(error instanceof Error ? error.message : String(error));
}
