import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { listReports, needsLook } from "./reports.server.ts";

/** Reports that wait for an associate: sent back by a coordinator, or resting on figures that were revised since. */
export async function listReportWork(trx: Trx, viewer: Associate) {
	const reports = await listReports(trx, viewer);
	return reports.flatMap((report) => {
		const { reportId, state, note, content } = report;
		const work = state === "draft" && note !== null ? "sent_back" : needsLook(report) ? "revised" : null;
		return work ? [{ reportId, title: content.title, work } as const] : [];
	});
}
