import { randomInt } from "node:crypto";
import { createServer } from "node:net";
import { readState, remember } from "./local.mjs";

function canListen(port, host) {
	return new Promise((resolve) => {
		const server = createServer();
		// A machine without IPv6 cannot listen on ::1, which does not mean that the port is taken.
		server.once("error", (error) => resolve(error.code !== "EADDRINUSE" && error.code !== "EACCES"));
		server.listen({ port, host, exclusive: true }, () => server.close(() => resolve(true)));
	});
}

export async function isFree(port) {
	return (await canListen(port, "127.0.0.1")) && (await canListen(port, "::1"));
}

/** A free port below the range that systems hand out for outgoing connections. */
export async function freePort() {
	for (let attempt = 0; attempt < 200; attempt++) {
		const port = randomInt(20_000, 32_000);
		if (await isFree(port)) return port;
	}
	throw new Error("No free port found between 20000 and 32000");
}

/** The port kept under this name from the last start, or a new one when it is taken. */
export async function rememberedPort(name) {
	const known = readState()[name];
	if (known && (await isFree(known))) return known;
	const port = await freePort();
	remember({ [name]: port });
	return port;
}
