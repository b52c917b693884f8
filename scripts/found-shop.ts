import { addPerson, findPersonByEmail } from "#app/data/people.server.ts";
import { inShop, outsideShops } from "#app/data/scope.server.ts";
import { housekeeper } from "#app/domain/viewer.ts";
import { givePresets } from "#app/services/shop-presets.server.ts";
import { closeDb } from "#db/connection.server.ts";

/** `npm run found-shop -- "Shop name" EUR owner@example.org "Owner's name"`: the first shop and owner of a deployment. */
async function main([shopName, currency, email, name]: string[]): Promise<void> {
  if (!shopName || !/^[A-Z]{3}$/.test(currency ?? "") || !email?.includes("@") || !name) {
    process.stderr.write('found-shop: say name, currency, e-mail and owner: npm run found-shop -- "Shop name" EUR owner@example.org "Owner"\n');
    process.exitCode = 2;
    return;
  }
  const shopId = await outsideShops(async (tx) => {
    const owner = (await findPersonByEmail(tx, email))?.id ?? (await addPerson(tx, { name, email, passwordHash: null }));
    const { rows } = await tx.raw<{ rows: Array<{ id: string }> }>("select scope.found_shop(?, ?, ?) as id", [shopName, currency!, owner]);
    return rows[0]!.id;
  });
  await inShop(housekeeper(shopId), (tx) => givePresets(tx, shopId));
  process.stdout.write(`${shopName} stands. ${name} signs in at the sign-in page with "Send me a link instead", and sets a password under "Your account".\n`);
}

await main(process.argv.slice(2));
await closeDb();
