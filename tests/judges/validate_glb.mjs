// Runs the glTF validator over GLB files and fails on any error or warning.
// usage: node validate_glb.mjs FILE.glb ...
// The folder with the validator's package stands in JUDGES_MODULES.
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";

const modules = process.env.JUDGES_MODULES ?? new URL(".", import.meta.url).pathname;
const validator = createRequire(modules + "/")("gltf-validator");
const files = process.argv.slice(2);
if (files.length === 0) {
  console.error("usage: node validate_glb.mjs FILE.glb ...");
  process.exit(2);
}
let failed = false;
for (const file of files) {
  const report = await validator.validateBytes(new Uint8Array(readFileSync(file)), {
    uri: file,
    maxIssues: 100,
  });
  const { numErrors, numWarnings, numInfos, messages } = report.issues;
  console.log(`${file}: ${numErrors} errors, ${numWarnings} warnings, ${numInfos} infos`);
  for (const message of messages.filter((m) => m.severity < 2)) {
    failed = true;
    console.log(`  ${message.code} ${message.pointer ?? ""}: ${message.message}`);
  }
}
process.exit(failed ? 1 : 0);
