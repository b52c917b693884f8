import fs from "node:fs";
import { runOrRefuse } from "./processes.mjs";

export const isRoot = () => process.getuid?.() === 0;

/** Debian packages that the tests use, each with a file that shows it is there. */
export const TEST_PACKAGES = [
  { name: "chromium", shownBy: process.env.CHROMIUM_PATH || "/usr/bin/chromium", use: "browser tests" },
  { name: "poppler-utils", shownBy: "/usr/bin/pdftotext", use: "reading the release sheet" },
  { name: "admesh", shownBy: "/usr/bin/admesh", use: "a second opinion on STL files" },
  { name: "unzip", shownBy: "/usr/bin/unzip", use: "opening a packet as a machine shop does" },
  { name: "rclone", shownBy: "/usr/bin/rclone", use: "a foreign client of the object store" },
  { name: "s3cmd", shownBy: "/usr/bin/s3cmd", use: "a foreign client of the object store" },
];

export const missingTestPackages = () => TEST_PACKAGES.filter(({ shownBy }) => !fs.existsSync(shownBy));

/** Installs packages without a question asked; the caller is root. */
export async function installDebianPackages(names) {
  const env = { ...process.env, DEBIAN_FRONTEND: "noninteractive" };
  await runOrRefuse({ command: "apt-get", args: ["update", "--quiet"], env }, "apt-get update");
  await runOrRefuse({ command: "apt-get", args: ["install", "--yes", "--quiet", "--no-install-recommends", ...names], env }, `apt-get install ${names.join(" ")}`);
}
