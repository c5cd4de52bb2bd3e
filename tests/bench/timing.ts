import { readFile } from "node:fs/promises";
import type { Client } from "pg";
import { median } from "simple-statistics";

/** Milliseconds: by the clock, and of the processor, which others on the machine do not lengthen; null where not told. */
export type Times = { clock: number; processor: number | null };

/**
 * The median times of several works. They take turns, so that a machine that others use slows all of them alike; a first turn
 * warms up and is not counted.
 */
export async function medians<Name extends string>(
	runs: number,
	works: Record<Name, () => Promise<Times>>,
): Promise<Record<Name, Times>> {
	const taken = new Map<string, Times[]>();
	for (let run = 0; run <= runs; run++) {
		for (const [name, work] of Object.entries<() => Promise<Times>>(works)) {
			const times = await work();
			if (run > 0) taken.set(name, [...(taken.get(name) ?? []), times]);
		}
	}
	return Object.fromEntries([...taken].map(([name, times]) => [name, medianTimes(times)])) as Record<Name, Times>;
}

export function medianTimes(times: readonly Times[]): Times {
	const processor = times.map((time) => time.processor);
	return {
		clock: median(times.map(({ clock }) => clock)),
		processor: processor.every((time) => time !== null) ? median(processor) : null,
	};
}

/** Times a work of this process. */
export async function timed(work: () => unknown): Promise<Times> {
	const [began, used] = [performance.now(), process.cpuUsage()];
	await work();
	const { user, system } = process.cpuUsage(used);
	return { clock: performance.now() - began, processor: (user + system) / 1000 };
}

/** Times a work of one backend of a database on this machine. */
export async function timedInBackend(pid: number, work: () => Promise<unknown>): Promise<Times> {
	const before = await processorTime(pid);
	const began = performance.now();
	await work();
	const clock = performance.now() - began;
	const after = await processorTime(pid);
	return { clock, processor: before === null || after === null ? null : after - before };
}

export async function backendOf(client: Client): Promise<number> {
	const { rows } = await client.query<{ pid: number }>("select pg_backend_pid() as pid");
	return rows[0]!.pid;
}

/** What a process has used so far, as Linux tells it; null elsewhere and for a database on another machine. */
async function processorTime(pid: number): Promise<number | null> {
	const told = await readFile(`/proc/${pid}/schedstat`, "utf8").catch(() => null);
	return told === null ? null : Number(told.split(" ")[0]) / 1e6;
}

/** The power of size with which times grow: the slope of a straight line through both logarithms. */
export function growthExponent(points: readonly { size: number; time: number }[]): number {
	const logs = points.map(({ size, time }) => ({ x: Math.log(size), y: Math.log(time) }));
	const mean = (key: "x" | "y") => logs.reduce((sum, point) => sum + point[key], 0) / logs.length;
	const [x, y] = [mean("x"), mean("y")];
	const covariance = logs.reduce((sum, point) => sum + (point.x - x) * (point.y - y), 0);
	return covariance / logs.reduce((sum, point) => sum + (point.x - x) ** 2, 0);
}
