import { spawnSync } from "node:child_process";

type Program = { command: string; argsFor: (code: string) => string[]; import: (library: string) => string };

const R: Program = {
  command: "Rscript",
  argsFor: (code) => ["--vanilla", "-e", code],
  import: (library) => `suppressMessages(library(${library}))`,
};

const pythonAt = (command: string): Program => ({
  command,
  argsFor: (code) => ["-c", code],
  import: (library) => `import ${library}`,
});

/** Another `python3` can stand before Debian's in the path. */
const PYTHONS = ["python3", "/usr/bin/python3"].map(pythonAt);

/** Runs code in a program that is installed with the libraries it needs; its standard output is JSON. */
export type Outside = { missing: string | null; run: <T>(code: string, input?: string) => T };

export function outsideR(...libraries: string[]): Outside {
  const packages = ["r-base-core", ...libraries.map((library) => `r-cran-${library.toLowerCase()}`)];
  return outside([R], libraries, packages);
}

export function outsidePython(library: string, debianPackage: string): Outside {
  return outside(PYTHONS, [library], [debianPackage]);
}

function outside(programs: Program[], libraries: string[], packages: string[]): Outside {
  const found = programs.find((program) => {
    const code = libraries.map(program.import).join("\n") || "1";
    return spawnSync(program.command, program.argsFor(code)).status === 0;
  });
  return {
    missing: found ? null : `needs Debian's ${packages.join(" and ")}, which is not installed here`,
    run: (code, input = "") => {
      if (!found) throw new Error("Not installed");
      const head = libraries.map(found.import).join("\n");
      const { status, stdout, stderr } = spawnSync(found.command, found.argsFor(`${head}\n${code}`), {
        input,
        encoding: "utf8",
        maxBuffer: 64 * 1024 * 1024,
      });
      if (status !== 0) throw new Error(`${found.command} failed: ${stderr}`);
      return JSON.parse(stdout);
    },
  };
}

export function csvOf(rows: readonly ArrayLike<number>[]): string {
  return rows.map((row) => Array.from(row).join(",")).join("\n");
}
