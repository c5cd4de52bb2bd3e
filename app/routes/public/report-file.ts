import type { Route } from "./+types/report-file";
import { countRead } from "#app/auth/report-reads.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { findPublishedReport, findReportFile } from "#app/publish/reports.server.ts";

const fileName = /^(\d{1,4})-(en|es)\.pdf$/;

/** A published report's PDF in one language. One whose figures were withdrawn is served to nobody any more. */
export async function loader({ params, request }: Route.LoaderArgs) {
	const [, version, language] = fileName.exec(params.file) ?? [];
	const report = language ? await findPublishedReport(params.slug, Number(version)) : undefined;
	const bytes = report && language ? await findReportFile(report.reportId, language) : undefined;
	if (!report || !language || !bytes) throw refusal("report_not_found");
	const release = await findReleaseById(report.releaseId);
	if (!release || release.withdrawn) throw refusal("release_withdrawn");
	countRead(request, report.reportId, "pdf");
	return new Response(new Uint8Array(bytes), {
		headers: {
			"content-type": "application/pdf",
			"content-language": language,
			"content-disposition": `inline; filename="${report.slug}-${report.version}-${language}.pdf"`,
			"cache-control": "public, max-age=300",
		},
	});
}
