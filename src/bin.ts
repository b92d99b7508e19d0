#!/usr/bin/env node
import { run } from './cli.ts';
import { processIo } from './commands/process-io.ts';

process.exitCode = await run(process.argv.slice(2), processIo());
