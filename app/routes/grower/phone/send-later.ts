/** Asks the browser, where it can, to wake the service worker when signal is back, though no page is open then. */
export function askToSendLater(): void {
	void navigator.serviceWorker?.ready.then((registration) =>
		(registration as { sync?: { register(tag: string): Promise<void> } }).sync?.register("answers").catch(() => {}),
	);
}
