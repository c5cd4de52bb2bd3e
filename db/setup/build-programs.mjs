// The programs beside the server, each as one file: read as the some hundred sources they are made of, they take twice as long
// to start.
import { join } from "node:path";
import { build, loadConfigFromFile } from "vite";
import { root } from "./local.mjs";

const { config } = await loadConfigFromFile({ command: "build", mode: "production" }, undefined, root);

await build({
	root,
	configFile: false,
	logLevel: "warn",
	// What is built into the server is built into these, too.
	ssr: config.ssr,
	build: {
		ssr: true,
		target: "node20",
		outDir: "build/programs",
		emptyOutDir: true,
		copyPublicDir: false,
		rolldownOptions: {
			input: {
				worker: join(root, "app/jobs/worker.ts"),
				"protect-worker": join(root, "app/protect/protect-worker.server.ts"),
				mail: join(root, "fakes/mail/server.ts"),
				"sign-in": join(root, "fakes/sign-in/server.ts"),
			},
			// Side by side, so that a program finds the file of its threads wherever its own code is.
			output: { entryFileNames: "[name].js", chunkFileNames: "[name]-[hash].js" },
		},
	},
});
