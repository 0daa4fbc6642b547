import { createServer, get } from "node:http";
import type { AddressInfo } from "node:net";
import { expect, test } from "vitest";
import { callerAddress, noteSocketAddresses } from "@/lib/caller-address";

const STRANGER = "203.0.113.9";
const INVENTED = "198.51.100.1";

test.each([
  ["without a proxy, whatever the caller sends along", 0, `${INVENTED}, ${STRANGER}`, STRANGER],
  ["without a proxy or a header", 0, STRANGER, STRANGER],
  ["behind one proxy", 1, `${STRANGER}, 10.0.0.2`, STRANGER],
  ["behind one proxy, with an invented address in front", 1, `${INVENTED}, ${STRANGER}, 10.0.0.2`, STRANGER],
  ["behind two proxies", 2, `${INVENTED},${STRANGER},10.0.0.3,10.0.0.2`, STRANGER],
  ["past a proxy that is not there", 1, STRANGER, STRANGER],
])("the caller's address is the one that a machine of ours has seen: %s", (_, proxies, forwarded, caller) => {
  expect(callerAddress(forwarded, proxies)).toBe(caller);
});

test("every request carries its socket's address behind whatever was sent along", async () => {
  noteSocketAddresses();
  const server = createServer((request, response) => response.end(request.headers["x-forwarded-for"]));
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  const { port } = server.address() as AddressInfo;
  const ask = (headers: Record<string, string>) =>
    new Promise<string>((resolve, reject) => {
      get({ host: "127.0.0.1", port, headers, agent: false }, (answer) => {
        answer.once("data", (data) => resolve(String(data)));
      }).once("error", reject);
    });
  expect(await ask({})).toBe("127.0.0.1");
  expect(await ask({ "X-Forwarded-For": INVENTED })).toBe(`${INVENTED}, 127.0.0.1`);
  await new Promise((resolve) => server.close(resolve));
});
