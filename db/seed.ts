import { closeDb } from "#db/connection.server.ts";
import { seedPeople } from "./seeds/people.ts";

// The demo shop, through the same services as the app. Running it again changes nothing.
await seedPeople();
await closeDb();
