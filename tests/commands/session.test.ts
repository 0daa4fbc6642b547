import { spawn } from "node:child_process";
import { once } from "node:events";
import { expect, test, vi } from "vitest";
import { startService } from "../../db/server/processes.mjs";
import { runSession } from "../../db/server/session.mjs";

const sessionModule = new URL("../../db/server/session.mjs", import.meta.url).href;

test("what a command started is stopped in reverse order when it returns, and when it fails", async () => {
  const stopped: string[] = [];
  const body = (result: () => number) => async (session: Parameters<Parameters<typeof runSession>[0]>[0]) => {
    session.onEnd("first", () => void stopped.push("first"));
    session.onEnd("second", async () => void stopped.push("second"));
    return result();
  };
  expect(await runSession(body(() => 3))).toBe(3);
  expect(stopped.splice(0)).toEqual(["second", "first"]);
  const failing = runSession(
    body(() => {
      throw new Error("no");
    }),
  );
  await expect(failing).rejects.toThrow("no");
  expect(stopped).toEqual(["second", "first"]);
});

test("a service that dies ends the command with a line that says so, and exit code 1", async () => {
  const printed = vi.spyOn(console, "error").mockReturnValue();
  const code = await runSession(async (session) => {
    session.watch(startService("Brittle", process.execPath, ["-e", "process.exit(7)"], { output: "ignore" }));
    await session.untilStopped();
  });
  expect(code).toBe(1);
  expect(printed).toHaveBeenCalledWith(expect.stringContaining("Brittle ended unexpectedly (exit code 7)"));
  printed.mockRestore();
});

test.each(["SIGINT", "SIGTERM", "SIGHUP"] as const)("%s stops everything first", async (signal) => {
  const script = `
    const { runSession } = await import(${JSON.stringify(sessionModule)});
    process.exitCode = await runSession(async (session) => {
      session.onEnd("a", () => console.log("stopped a"));
      session.onEnd("b", () => console.log("stopped b"));
      console.log("up");
      const keepAlive = setInterval(() => {}, 1_000);
      await session.untilStopped();
      clearInterval(keepAlive);
    });
    console.log("done");`;
  const child = spawn(process.execPath, ["--input-type=module", "-e", script]);
  let output = "";
  child.stdout.on("data", (chunk) => {
    output += chunk;
    if (String(chunk).includes("up")) child.kill(signal);
  });
  const [code] = await once(child, "close");
  expect({ code, output }).toEqual({ code: 0, output: "up\nstopped b\nstopped a\ndone\n" });
});
