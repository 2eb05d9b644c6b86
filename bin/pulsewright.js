#!/usr/bin/env node
// Committed so that its mode survives; the work is in the build, so a rebuilt dist/ is used at once.
import { main } from '../dist/cli/main.js';

process.exitCode = await main(process.argv.slice(2), {
  stdin: process.stdin,
  stdout: process.stdout,
  stderr: process.stderr,
});
