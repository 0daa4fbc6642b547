import { readFileSync, writeFileSync } from "node:fs";
import { createServer } from "node:net";

/**
 * Whether a loopback port can be listened on; port 0 asks the system for any.
 * @param {number} port
 * @returns {Promise<number | undefined>} the port, or undefined when it is taken
 */
function tryPort(port) {
  return new Promise((resolve, reject) => {
    const server = createServer();
    server.once("error", (/** @type {NodeJS.ErrnoException} */ error) => {
      if (error.code === "EADDRINUSE" || error.code === "EACCES") resolve(undefined);
      else reject(error);
    });
    server.listen({ port, host: "127.0.0.1", exclusive: true }, () => {
      const address = server.address();
      server.close(() => resolve(typeof address === "object" && address ? address.port : undefined));
    });
  });
}

/** @param {number} port */
export async function isPortFree(port) {
  return (await tryPort(port)) !== undefined;
}

/** @returns {Promise<number>} a loopback port nobody listens on now */
export async function freePort() {
  const port = await tryPort(0);
  if (port === undefined) throw new Error("The system has no free port on 127.0.0.1.");
  return port;
}

/**
 * The port remembered in a file while it is free, otherwise a new one, remembered from now on.
 * @param {string} file
 */
export async function rememberedPort(file) {
  const remembered = Number(readIfThere(file));
  if (Number.isInteger(remembered) && remembered > 0 && (await isPortFree(remembered))) return remembered;
  const port = await freePort();
  writeFileSync(file, `${port}\n`);
  return port;
}

/** @param {string} file */
function readIfThere(file) {
  try {
    return readFileSync(file, "utf8");
  } catch (error) {
    if (error instanceof Error && "code" in error && error.code === "ENOENT") return undefined;
    throw error;
  }
}
