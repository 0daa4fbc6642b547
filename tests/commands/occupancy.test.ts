import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { createServer } from "node:net";
import { tmpdir } from "node:os";
import path from "node:path";
import { afterAll, beforeEach, expect, test, vi } from "vitest";
import { findOccupant, occupy } from "../../db/server/occupancy.mjs";
import { freePort, isPortFree, rememberedPort } from "../../db/server/ports.mjs";
import { identify, isAlive, startService, stopProcess } from "../../db/server/processes.mjs";
import { Refusal } from "../../db/server/refusal.mjs";

const base = mkdtempSync(path.join(tmpdir(), "cupel-occupancy-"));
afterAll(() => rmSync(base, { recursive: true }));

let folder = "";
beforeEach(() => {
  folder = mkdtempSync(path.join(base, "data-"));
});

function startSleeper() {
  return startService("Sleeper", process.execPath, ["-e", "setInterval(() => {}, 1000)"], {
    output: "ignore",
  });
}

test("a second command is refused by name while the first holds the folder, and let in afterwards", async () => {
  const first = await occupy(folder, "npm start");
  first.note({ appUrl: "http://localhost:3000" });
  expect(findOccupant(folder)).toMatchObject({ command: "npm start", appUrl: "http://localhost:3000" });
  await expect(occupy(folder, "npm run replay")).rejects.toThrow(Refusal);
  await expect(occupy(folder, "npm run replay")).rejects.toThrow(/"npm start".*http:\/\/localhost:3000/);
  first.leave();
  expect(findOccupant(folder)).toBeUndefined();
  (await occupy(folder, "npm run replay")).leave();
});

test("what a killed command left running is stopped before the next one has the folder", async () => {
  const log = vi.spyOn(console, "log").mockReturnValue();
  const leftOver = startSleeper();
  const killed = startSleeper();
  await killed.stop();
  const record = {
    command: "npm start",
    owner: killed.identity,
    children: [{ name: leftOver.name, ...leftOver.identity }],
  };
  writeFileSync(path.join(folder, "running.json"), JSON.stringify(record));
  expect(findOccupant(folder)).toBeUndefined();

  const next = await occupy(folder, "npm start");
  expect(isAlive(leftOver.identity)).toBe(false);
  expect(log).toHaveBeenCalledWith(expect.stringContaining("ended without tidying up"));
  expect(JSON.parse(readFileSync(path.join(folder, "running.json"), "utf8")).owner.pid).toBe(process.pid);
  next.leave();
  log.mockRestore();
});

test("a process number taken over by another process is not mistaken for the old one", async () => {
  const impostor = { ...identify(process.pid), startedAt: "1" };
  expect(isAlive(identify(process.pid))).toBe(true);
  expect(isAlive(impostor)).toBe(false);
  await stopProcess(impostor, 1_000);
});

test("a service that is stopped is gone, and says how it ended", async () => {
  const service = startSleeper();
  expect(isAlive(service.identity)).toBe(true);
  await service.stop();
  expect(isAlive(service.identity)).toBe(false);
  expect(await service.ended).toBe("SIGTERM");
});

test("a remembered port is used again while it is free, and replaced when somebody took it", async () => {
  const file = path.join(folder, "some.port");
  const port = await rememberedPort(file);
  expect(await rememberedPort(file)).toBe(port);

  const squatter = createServer();
  await new Promise<void>((resolve) => squatter.listen(port, "127.0.0.1", resolve));
  expect(await isPortFree(port)).toBe(false);
  const other = await rememberedPort(file);
  expect(other).not.toBe(port);
  await new Promise((resolve) => squatter.close(resolve));
  expect(await rememberedPort(file)).toBe(other);
  expect(await isPortFree(await freePort())).toBe(true);
});

test("a spoilt port file is replaced", async () => {
  const file = path.join(folder, "spoilt.port");
  writeFileSync(file, "not a port\n");
  expect(await rememberedPort(file)).toBeGreaterThan(0);
  expect(existsSync(file)).toBe(true);
});
