import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import type { Screen } from "#app/collect/form.ts";
import { Outline } from "./outline.tsx";
import { PhonePreview } from "./phone-preview.tsx";

type EditorFrameProps = { formId: string; draft: FormDraft; preview: Screen; children: ReactNode };

/** What is in hand between the whole form and the phone. On a narrow page the outline comes last, with a link to it. */
export function EditorFrame({ formId, draft, preview, children }: EditorFrameProps) {
	const { t } = useTranslation("forms");
	return (
		<div className="grid gap-x-8 gap-y-8 lg:grid-cols-[14rem_minmax(0,1fr)]">
			<div className="order-last min-w-0 lg:order-first">
				<Outline formId={formId} draft={draft} />
			</div>
			<div className="min-w-0">
				<p className="mb-4 lg:hidden">
					<a href="#outline">{t("outline.jump")}</a>
				</p>
				<div className="grid gap-8 xl:grid-cols-[minmax(0,1fr)_21rem]">
					<div className="min-w-0">{children}</div>
					<div className="min-w-0 xl:sticky xl:top-18 xl:self-start">
						<PhonePreview screen={preview} />
					</div>
				</div>
			</div>
		</div>
	);
}
