/** A reason not to go on that the person at the terminal can act on: printed as one line, without a stack. */
export class Refusal extends Error {
  name = "Refusal";
}

/**
 * Runs a command's body; a refusal ends it with one clear line, anything else with its stack.
 * @param {() => Promise<number | void>} body answers the exit code
 */
export async function runCommand(body) {
  try {
    process.exitCode = (await body()) ?? 0;
  } catch (error) {
    console.error(error instanceof Refusal ? `\n${error.message}` : error);
    process.exitCode = 1;
  }
}
