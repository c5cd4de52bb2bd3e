import { checkHealth } from "#app/jobs/health.server.ts";

/** 200 when database, queue and mail answer, else 503; says which, and nothing more. */
export async function loader() {
	const health = await checkHealth();
	return Response.json(health, { status: health.ok ? 200 : 503, headers: { "cache-control": "no-store" } });
}
