import { Command, CommanderError } from "commander";
import { Problem } from "../src/errors.js";
import { packageVersion } from "../src/package-files.js";
import type { CommandModule } from "./command.js";
import { commands } from "./commands.js";
import { type CommonOptions, type ExitCode, exitCode, exitCodeOf, type Streams } from "./context.js";
import { errorDocument, errorText } from "./print/error.js";
import { Printer } from "./print/printer.js";

function addCommon(command: Command): void {
  command
    .option("--json", "print one JSON document on standard output, and nothing else there")
    .option("--quiet", "leave out progress and remarks")
    .option("--no-color", "print without colour")
    .option("--debug", "show the stack of an unexpected error");
}

function exampleText(module: CommandModule<never>): string {
  const lines = module.examples.map(({ call, does }) => `  $ ${call}\n      ${does}`);
  return `\nExamples:\n${lines.join("\n")}\n`;
}

/** Commander's own words for a wrong call, as an error with the way out. */
function callProblem(error: CommanderError, name: string | undefined): Problem {
  const message = error.message.replace(/^error: /, "").replace(/\n\(Did you mean (.*)\?\)/, " (did you mean $1?)");
  return new Problem("input", {
    code: "wrong-call",
    message: `${message.charAt(0).toUpperCase()}${message.slice(1)}.`.replace(/\.\.$/, "."),
    remedy: name ? `See 'dragledger ${name} --help'.` : "See 'dragledger --help'.",
  });
}

/** Runs one call of the program and gives its exit code. Nothing here ends the process. */
export async function run(argv: string[], streams: Streams): Promise<ExitCode> {
  const name = argv.find((word) => !word.startsWith("-"));
  const wanted = commands.find((listed) => listed.name === (name === "help" ? argv[argv.indexOf("help") + 1] : name));
  const wantsJson = argv.includes("--json");
  const debug = argv.includes("--debug");
  let code: ExitCode = exitCode.done;

  const program = new Command("dragledger")
    .description(
      "A ledger of the forces on a road vehicle: from body STL to OpenFOAM case, convergence, per-part drag and lift, comparison, report.",
    )
    .version(packageVersion, "--version", "print the version")
    .helpOption("-h, --help", "show help")
    .helpCommand("help [command]", "show help for a command")
    .showSuggestionAfterError(true)
    .exitOverride()
    .configureHelp({ helpWidth: streams.stdout.columns ?? 100 })
    .configureOutput({
      writeOut: (text) => streams.stdout.write(text),
      writeErr: (text) => streams.stderr.write(text),
      // Errors are told once, by the catch below, in the program's own form.
      outputError: () => {},
    })
    .addHelpText(
      "after",
      "\nExamples:\n  $ dragledger demo\n      the whole job on the sample pickup\n  $ dragledger inspect body.stl\n      is this body fit to mesh, and how large is it?\n" +
        "\nExit codes: 0 done; 1 a defect of the program; 2 wrong input or call; 3 done, but the answer is no; 4 a tool failed or is missing.\n",
    );

  for (const listed of commands) {
    const command = program.command(listed.name).summary(listed.summary).description(listed.summary);
    if (listed !== wanted) continue;
    const { command: module } = await listed.load();
    command.description(module.description);
    if (module.arguments) command.arguments(module.arguments);
    module.options(command);
    addCommon(command);
    command.addHelpText("after", exampleText(module));
    command.action(async (...values: unknown[]) => {
      const options = command.opts() as CommonOptions;
      const print = new Printer(streams, options);
      const args = values.slice(0, -2);
      code = await module.run({ args, options: options as never, print, signal: streams.signal });
      await print.end();
    });
  }

  try {
    if (argv.length === 0) {
      program.outputHelp();
      return exitCode.done;
    }
    await program.parseAsync(argv, { from: "user" });
    return code;
  } catch (thrown) {
    if (thrown instanceof CommanderError && thrown.exitCode === 0) return exitCode.done;
    const problem = thrown instanceof CommanderError ? callProblem(thrown, wanted?.name) : thrown;
    if (wantsJson) streams.stdout.write(`${JSON.stringify(errorDocument(problem), null, 2)}\n`);
    else streams.stderr.write(errorText(problem, { debug, colour: streams.stderr.isTTY === true && !argv.includes("--no-color") }));
    return problem instanceof Problem ? exitCodeOf(problem) : exitCode.defect;
  }
}
