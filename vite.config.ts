import { reactRouter } from "@react-router/dev/vite";
import tailwindcss from "@tailwindcss/vite";
import { defineConfig } from "vitest/config";

export default defineConfig({
	plugins: [tailwindcss(), ...(process.env.VITEST ? [] : [reactRouter()])],
	// The scripts of growers' pages stand by themselves, like workers: each one file, with an address of its own.
	worker: { format: "es" },
	// Built in: of hundreds of files that each start would read, a few functions are used.
	ssr: { noExternal: process.env.VITEST ? [] : ["@turf/turf", "kysely"] },
	test: {
		// Pictures are drawn in the style sheets' own colours.
		css: { include: [/\.css\?raw$/] },
		projects: [
			{
				extends: true,
				test: {
					name: "unit",
					// Pure functions: no file leaves anything behind that another could meet.
					isolate: false,
					// Some read every source of the project, beside a browser's tests on the same two cores.
					testTimeout: 30_000,
					hookTimeout: 60_000,
					include: [
						"app/**/*.test.{ts,tsx}",
						"db/**/*.test.ts",
						"fakes/**/*.test.ts",
						"tests/reference/**/*.test.ts",
						"tests/rules/**/*.test.ts",
					],
				},
			},
			{
				extends: true,
				test: {
					name: "database",
					include: ["tests/database/**/*.test.ts", "tests/walls/**/*.test.ts"],
					// A module's settings are each file's own in a thread too, which starts in half the time of a process.
					pool: "threads",
					expect: { poll: { timeout: 20_000 } },
					testTimeout: 60_000,
					hookTimeout: 120_000,
				},
			},
			{
				extends: true,
				test: {
					name: "browser",
					include: ["tests/browser/**/*.test.ts"],
					// What is waited for comes at once on a calm machine; a busy one is no reason to fail.
					expect: { poll: { timeout: 20_000 } },
					testTimeout: 300_000,
					hookTimeout: 300_000,
					// Each file has a whole product of its own, which fills two cores by itself.
					fileParallelism: false,
					sequence: { groupOrder: 1 },
				},
			},
		],
	},
});
