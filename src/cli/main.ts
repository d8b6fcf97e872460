import { Command, CommanderError, InvalidArgumentError, Option } from 'commander';
import { version } from '#src/run/version.ts';
import { CommandError, EXIT } from './exit.ts';

const JOB = 'the job file (.job.json)';

function whole(least: number, most: number): (text: string) => number {
  return (text) => {
    const value = Number(text);
    if (/^\d+$/.test(text) && value >= least && value <= most) return value;
    throw new InvalidArgumentError(`Allowed: whole numbers, ${least} to ${most}.`);
  };
}

const jsonOption = () => new Option('--json', 'print one JSON object and nothing else').default(false);
const strictOption = () => new Option('--strict', 'exit with 1 when a limit of the drawing is missed').default(false);
const workersOption = () =>
  new Option('--workers <number>', 'threads to use (default: all, up to 4)').argParser(whole(1, 64));

const EXAMPLES = `
Examples:
  spallwright check pocket.job.json
  spallwright estimate pocket.job.json
  spallwright cut pocket.job.json --out out/pocket
  spallwright cut pocket.job.json --out out/pocket --force --quality fine --seed 7
  spallwright libraries

Exit codes: 0 done, 1 a limit missed (with --strict), 2 bad input, 3 failed, 130 stopped with Ctrl-C.
Predictions are estimates: confirm them by a trial cut before production.`;

/** The command line; `finish` gets the exit code of the command that ran. */
function commandLine(finish: (code: number) => void): Command {
  const program = new Command('spallwright')
    .description(
      'Plans and judges blind cavities sunk into glass, ceramics and crystals with a vibrated tool and slurry.',
    )
    .version(version, '--version', 'print the version')
    .helpOption('--help', 'print this help')
    .helpCommand('help [command]', 'print the help of a command')
    .showHelpAfterError('Try: spallwright --help')
    .addHelpText('after', EXAMPLES);

  program
    .command('cut')
    .description('Cut a job: grow the cavity impact by impact, measure it, judge it and draw it.')
    .argument('<job>', JOB)
    .requiredOption('--out <folder>', 'where the result goes; a new folder')
    .option('--force', 'replace an earlier result in that folder', false)
    .addOption(new Option('--seed <number>', "instead of the job's own").argParser(whole(0, 4294967295)))
    .addOption(new Option('--quality <word>', "instead of the job's own").choices(['preview', 'standard', 'fine']))
    .addOption(workersOption())
    .addOption(strictOption())
    .addOption(jsonOption())
    .addHelpText('after', '\nExample:\n  spallwright cut pocket.job.json --out out/pocket')
    .action(async (job, options) => finish(await (await import('./commands/cut.ts')).cut(job, options)));

  program
    .command('estimate')
    .description('Estimate a job from the same laws, in the mean and at once.')
    .argument('<job>', JOB)
    .addOption(strictOption())
    .addOption(jsonOption())
    .action(async (job, options) => finish(await (await import('./commands/estimate.ts')).estimate(job, options)));

  program
    .command('check')
    .description('Check a job file and say what is left to defaults.')
    .argument('<job>', JOB)
    .addOption(jsonOption())
    .action(async (job, options) => finish(await (await import('./commands/check.ts')).check(job, options)));

  program
    .command('libraries')
    .description('List the materials, tools, abrasives and grades that jobs may name.')
    .option('--check', 'check them against their schemas instead', false)
    .addOption(jsonOption())
    .action(async (options) => finish(await (await import('./commands/libraries.ts')).libraries(options)));

  program
    .command('validate')
    .description('Hold the model against published values: one table, with what was fitted and what misses.')
    .option('--write <file>', 'put the table into a Markdown file, between its markers')
    .addOption(jsonOption())
    .action(async (options) => finish(await (await import('./commands/validate.ts')).validate(options)));

  program
    .command('demo')
    .description('Cut the job that comes with the program, into out/demo.')
    .addOption(workersOption())
    .action(async (options) => finish(await (await import('./commands/demo.ts')).demo(options)));

  // a command copies this when it is made, so it comes before none of them
  for (const command of [program, ...program.commands]) command.exitOverride().helpOption('--help', 'print this help');
  return program;
}

/** Exit code for whatever ended a command; tells people on the error stream, and programs as JSON where they asked. */
function failed(error: unknown): number {
  if (error instanceof CommanderError) return error.exitCode === 0 ? EXIT.done : EXIT.badInput;
  const known = error instanceof CommandError;
  const message = error instanceof Error ? error.message : String(error);
  const text = known ? message : `Failed: ${message}`;
  process.stderr.write(`${text}\n`);
  const code = known ? error.code : EXIT.failed;
  if (process.argv.includes('--json')) {
    const details = known ? error.details : {};
    process.stdout.write(`${JSON.stringify({ error: { code, message: text, ...details } })}\n`);
  }
  return code;
}

// a reader that goes away (head, less) is no failure
process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  if (error.code === 'EPIPE') process.exit(process.exitCode ?? EXIT.done);
  throw error;
});

try {
  await commandLine((code) => {
    process.exitCode = code;
  }).parseAsync();
} catch (error) {
  process.exitCode = failed(error);
}
