// oxlint-disable-next-line import/default -- the query makes it the address of the built script
import offlineApp from "./phone/offline/app.tsx?worker&url";
// oxlint-disable-next-line import/default -- as above
import serviceWorker from "./phone/service-worker.ts?worker&url";

/**
 * The service worker under an address that stays, within /answer/ and so for these pages alone. It names what it goes with, so
 * that a browser sees a new version of either as a new worker.
 */
export function loader() {
	const script = `// ${offlineApp}\nimportScripts(${JSON.stringify(serviceWorker)});\n`;
	return new Response(script, {
		headers: { "content-type": "text/javascript; charset=utf-8", "cache-control": "no-cache" },
	});
}
