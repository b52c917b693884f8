import { closeDb } from "#db/connection.server.ts";
import { seedDemo } from "./seeds/demo.ts";

// The demo shop, through the same services as the app. Running it again changes nothing.
await seedDemo();
await closeDb();
