// Loaded into each service before its own code: when the start command is gone, even by kill -9, the service goes too.
if (process.connected) {
	process.on("disconnect", () => {
		process.kill(process.pid, "SIGTERM");
		setTimeout(() => process.exit(1), 5000).unref(); // it had its time to finish
	});
	process.channel?.unref(); // waiting for that must not keep a service alive that is done
}
