import { EnvironmentFault, parseEnv, type Env } from "#app/environment.server.ts";

function readEnvOrEnd(): Env {
  try {
    return parseEnv(process.env);
  } catch (error) {
    if (!(error instanceof EnvironmentFault)) throw error;
    // Nothing of the app can run, and who starts it needs the list and no stack trace.
    console.error(error.message);
    process.exit(2);
  }
}

export const env: Env = readEnvOrEnd();
