import { execFileSync } from "node:child_process";
import { mkdtempSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { fileURLToPath } from "node:url";
import sharp from "sharp";
import type { Page } from "@playwright/test";
import { expect, test } from "../support/browser.ts";

const model = (name: string) => fileURLToPath(new URL(`../support/models/${name}`, import.meta.url));
const press = (page: Page, name: string | RegExp) => page.getByRole("button", { name, exact: typeof name === "string" }).click();
const follow = (page: Page, name: string | RegExp) => page.getByRole("link", { name, exact: typeof name === "string" }).first().click();

/** The words of the last mail to this address that holds this, once it was caught. */
async function caughtMail(to: string, holding: string): Promise<string> {
  let text = "";
  await expect(async () => {
    const answer = await fetch(`${process.env.MAIL_CATCHER_URL}/api/mails`);
    const { mails } = (await answer.json()) as { mails: Array<{ to: string[]; subject: string; text: string }> };
    const mail = mails.find((one) => one.to.includes(to) && one.subject.includes(holding));
    expect(mail, `a mail to ${to} about ${holding}`).toBeDefined();
    text = mail!.text;
  }).toPass({ timeout: 30_000 });
  return text;
}

// The whole job by four people, each in a browser of their own, on files of open model
// repositories: featuretype.STEP and featuretype.STL (mikedh/trimesh, MIT) are one part, in inches.
test("from the customer's hardware to the sealed packet at the machine shop", async ({ people }) => {
  test.setTimeout(300_000);
  const designer = await people.as("designer");

  // A job, the hardware, a part.
  await designer.goto("/jobs/new");
  const number = await designer.getByLabel("Number").inputValue();
  await designer.getByLabel("Job", { exact: true }).fill("Intake spacer");
  await designer.getByLabel("Customer", { exact: true }).selectOption({ label: "Runa Aune" });
  await press(designer, "Open the job");
  await expect(designer.getByRole("heading", { name: "Intake spacer" })).toBeVisible();
  const jobUrl = new URL(designer.url()).pathname;

  await follow(designer, "Take in hardware");
  await designer.getByLabel("Hardware").fill("Intake flange");
  await press(designer, "Take it in");
  await expect(designer.getByRole("heading", { name: "Intake flange" })).toBeVisible();

  await designer.goto(`${jobUrl}/parts/new`);
  await designer.getByLabel("Part", { exact: true }).fill("Intake spacer");
  await designer.getByLabel("Plate").check();
  await designer.getByLabel(/^Stock/).selectOption({ index: 1 });
  await press(designer, "Add it, then drop its model");

  // The model: STEP and STL through the upload panel, straight to the store.
  await expect(designer.getByRole("heading", { name: /Files of Intake spacer 1/ })).toBeVisible();
  const revisionUrl = new URL(designer.url()).pathname.replace("/files", "");
  await designer.locator('input[type="file"]').setInputFiles([model("step/featuretype.STEP"), model("stl/featuretype.STL")]);
  // The STL was exported with open edges; it is said before anything is sent.
  await expect(designer.getByText(/3,476 triangles, not closed/)).toBeVisible();
  await designer.getByLabel("inches").check();
  await expect(designer.getByRole("button", { name: "Upload 2 files" })).toBeVisible();
  await press(designer, "Upload 2 files");
  await expect(designer.getByText(/one valid solid/)).toBeVisible({ timeout: 90_000 });
  await expect(designer.getByText(/3,476 triangles/)).toBeVisible({ timeout: 60_000 });

  // What must hold.
  await designer.goto(`${revisionUrl}/gate`);
  await follow(designer, "Add a characteristic");
  await designer.getByLabel("Characteristic").fill("Drops over the dowels");
  await designer.getByLabel("a yes/no question").check();
  await designer.getByLabel("Question", { exact: true }).fill("Does it drop over both dowels by hand?");
  await press(designer, "Add it, then another");
  await expect(designer.getByLabel("Characteristic")).toHaveValue("");
  await designer.getByLabel("Characteristic").fill("Bore");
  await designer.getByLabel("limits", { exact: true }).check();
  await designer.getByLabel("Lower limit", { exact: true }).fill("20");
  await designer.getByLabel("Upper limit", { exact: true }).fill("20.1");
  await designer.getByLabel("Lower limit on the print").fill("19.9");
  await designer.getByLabel("Upper limit on the print").fill("20.3");
  await press(designer, "Add it");
  await expect(designer.getByRole("table", { name: "Characteristics" })).toContainText("Bore");

  // A print, tried on the hardware at the bench, on a phone.
  await designer.goto(`${revisionUrl}/prints/new`);
  const sliced = designer.getByLabel("Sliced from");
  await sliced.selectOption(await sliced.locator("option", { hasText: "featuretype.STEP" }).getAttribute("value"));
  await designer.getByLabel("Preset").selectOption({ index: 1 });
  await press(designer, "Record the print");
  await expect(designer).toHaveURL(/\/prints\/[0-9a-f-]{36}$/);
  const printUrl = new URL(designer.url()).pathname;
  const bench = await people.as("designer", { width: 390, height: 844 });
  await bench.goto(`${printUrl}/fit-checks/new`);
  await press(bench, /Intake flange/);
  await press(bench, "Yes");
  const photo = path.join(mkdtempSync(path.join(tmpdir(), "spotblue-photo-")), "fit.jpg");
  await sharp({ create: { width: 800, height: 600, channels: 3, background: "#9fb4c4" } }).jpeg().toFile(photo);
  await bench.locator('input[type="file"]').first().setInputFiles(photo);
  await expect(bench.getByRole("list", { name: "Photos kept" }).getByRole("img")).toHaveCount(1);
  await press(bench, "Next");
  await press(bench, /Caliper/);
  for (const key of ["2", "0", "point", "1"]) await press(bench, key);
  await expect(bench.getByText(/inside by/)).toBeVisible();
  await press(bench, /^Save/);
  await press(bench, "Record the fit check");
  await expect(bench).toHaveURL(/fit-checks\/[0-9a-f-]+$/, { timeout: 30_000 });
  await expect(bench.getByRole("img", { name: /^Photo/ }).first()).toBeVisible({ timeout: 60_000 });

  // Instructions, questions, cautions.
  await designer.goto(`${revisionUrl}/instructions`);
  await designer.getByLabel("Datums").fill("A: large face, B: bore");
  await designer.getByLabel("Critical surfaces").fill("none");
  for (const select of await designer.getByLabel("What to do").all()) await select.selectOption("leave");
  await press(designer, "Confirm for this model");
  await expect(designer.getByText(/Confirmed by Ines Barrow/)).toBeVisible();
  await designer.goto(`${revisionUrl}/cautions`);
  await press(designer, "I have read and understood them");
  await designer.goto(`${revisionUrl}/approval`);
  await press(designer, "Show it to the customer");
  await expect(designer.getByText(/Shown to the customer since/)).toBeVisible();
  await designer.goto(`${jobUrl}/access`);
  await designer.getByRole("listitem").filter({ hasText: "Marten Sool" }).getByRole("button", { name: "Share the job" }).click();
  await expect(designer.getByText(/may look/).first()).toBeVisible();

  // The machinist says that it can be made.
  const machinist = await people.as("machinist");
  await machinist.goto(`${revisionUrl}/makeability`);
  for (const yes of await machinist.getByLabel("Yes").all()) await yes.check();
  await machinist.getByLabel(/^Price/).fill("480");
  await press(machinist, "Send the answer");
  await expect(machinist.getByRole("heading", { name: "It can be made" })).toBeVisible();

  // The customer looks, leaves a callout, and says yes after the answer.
  const customer = await people.as("customer", { width: 390, height: 844 });
  await customer.goto(jobUrl.replace("/jobs/", "/your-job/"));
  await customer.getByRole("img", { name: /^Photo/ }).first().click();
  await expect(customer).toHaveURL(/photos/);
  await customer.goto(jobUrl.replace("/jobs/", "/your-job/"));
  await press(customer, "Yes, cut it");
  await expect(customer.getByText(/you said yes/)).toBeVisible();

  // The owner: deposit, and the decision.
  const owner = await people.as("owner");
  await owner.goto(`${jobUrl}/deposit`);
  await owner.getByLabel("not asked").check();
  await owner.getByLabel(/Why|Reason/).first().fill("A known customer");
  await press(owner, "Save");
  await designer.goto(`${revisionUrl}/gate`);
  await press(designer, "Sign and put it to the gate");
  await expect(designer.getByText("Put there by Ines Barrow")).toBeVisible();
  await owner.goto(`${revisionUrl}/gate`);
  await expect(owner.getByRole("heading", { name: "Go", exact: true })).toBeVisible();
  await press(owner, "Go: release to billet");
  await expect(owner.getByRole("heading", { name: /Intake spacer A, go/ })).toBeVisible();
  await expect(owner.getByRole("link", { name: "Fetch the packet" })).toBeVisible({ timeout: 60_000 });

  // The machine shop reads its mail, fetches the packet, and holds it against its sums.
  const mail = await caughtMail("marten@sool.example", "Intake spacer A");
  await machinist.goto(new URL(/https?:\/\/\S+\/packets\/\S+/.exec(mail)![0]).pathname);
  const [download] = await Promise.all([machinist.waitForEvent("download"), follow(machinist, "Fetch the packet")]);
  const folder = mkdtempSync(path.join(tmpdir(), "spotblue-packet-"));
  await download.saveAs(path.join(folder, "packet.zip"));
  execFileSync("unzip", ["-q", "packet.zip"], { cwd: folder });
  const sums = execFileSync("sha256sum", ["-c", "SHA256SUMS"], { cwd: folder, encoding: "utf8" }).trim().split("\n");
  expect(sums.length).toBeGreaterThanOrEqual(6);
  expect(sums.every((line) => line.endsWith(": OK"))).toBe(true);
  await press(machinist, "I have received it");
  await expect(machinist.getByText("You acknowledged it.")).toBeVisible();
  await owner.reload();
  await expect(owner.getByText("Marten Sool acknowledged the packet")).toBeVisible();
  expect(number).toMatch(/^\d{4}-\d{3}$/);
});
