import { createServer, request } from "node:http";
import type { AddressInfo } from "node:net";
import { expect, test } from "vitest";
import { makeRequestsReadable, readableAddress } from "./readable-request.server.ts";

test.each([
	["/api/v1/%E0%A4%A", "/api/v1/%25E0%25A4%25A"],
	["/api/v1/%?q=%zz", "/api/v1/%25?q=%zz"],
	["/data/a%20b?q=1%2", "/data/a%20b?q=1%2"],
	["/desk/growers?q=a%00b&state=%00", "/desk/growers?q=ab&state="],
	["/", "/"],
])("the address %s is read as %s", (address, read) => {
	expect(readableAddress(address)).toBe(read);
});

test("a server is given what it can read, with a method that it knows", async () => {
	makeRequestsReadable();
	const server = createServer((asked, answer) => answer.end(`${asked.method} ${asked.url}`)).listen(0, "127.0.0.1");
	await new Promise((resolve) => server.once("listening", resolve));
	const { port } = server.address() as AddressInfo;
	const seen = (method: string, path: string) =>
		new Promise<string>((resolve, reject) => {
			const sent = request({ host: "127.0.0.1", port, method, path, agent: false }, (answer) => {
				answer.setEncoding("utf8").on("data", resolve);
			});
			sent.on("error", reject).end();
		});
	expect(await seen("TRACE", "/api/v1/releases")).toBe("PUT /api/v1/releases");
	expect(await seen("GET", "/api/v1/releases/%zz")).toBe("GET /api/v1/releases/%25zz");
	expect(await seen("OPTIONS", "/api/v1/releases")).toBe("OPTIONS /api/v1/releases");
	for (const method of ["TRACE", "PROPFIND", "OPTIONS"]) expect(await seen(method, "/apiary")).toBe("PUT /apiary");
	expect(await seen("POST", "/api/v1/releases")).toBe("POST /api/v1/releases");
	await new Promise((resolve) => server.close(resolve));
});
