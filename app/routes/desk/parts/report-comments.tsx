import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import type { ReportComment } from "#app/publish/drafting/report-comments.server.ts";
import type { Block } from "#app/publish/report.ts";

type CommentsProps = {
	comments: ReportComment[];
	blocks: Block[];
	/** Comments are taken until the report is published. */
	open: boolean;
	sent?: { values?: FormValues; problems?: Problem[] } | object;
};

/** What author and second person have to say to each other about a report or one of its blocks. */
export function Comments({ comments, blocks, open, sent }: CommentsProps) {
	const { t } = useTranslation("report");
	if (!open && comments.length === 0) return null;
	const waiting = comments.filter(({ resolvedAt }) => !resolvedAt).length;
	return (
		<details
			className="no-print mb-8 border-y border-rule py-3"
			open={waiting > 0 || Boolean(sent && "problems" in sent) || undefined}
		>
			<summary className="min-h-11 cursor-pointer py-2 font-bold text-damson">
				{waiting > 0 ? t("comments.title", { count: waiting }) : t("comments.none")}
			</summary>
			<ul className="list-none">
				{comments.map((comment) => (
					<Comment key={comment.commentId} comment={comment} blocks={blocks} />
				))}
			</ul>
			{open && <CommentForm key={comments.length} blocks={blocks} sent={sent} />}
		</details>
	);
}

function useBlockName(blocks: Block[]) {
	const { t } = useTranslation("public");
	return (id: string | null) => {
		const index = blocks.findIndex((block) => block.id === id);
		const block = blocks[index];
		if (!block) return t("report:comments.whole");
		return t("report_editor.blockNamed", { number: index + 1, type: t(`report_editor.types.${block.type}`) });
	};
}

function Comment({ comment, blocks }: { comment: ReportComment; blocks: Block[] }) {
	const { t } = useTranslation("report");
	const format = useFormat();
	const blockName = useBlockName(blocks);
	return (
		<li className="border-t border-rule py-3">
			<p className="text-sm text-quiet">
				{t("comments.by", {
					name: comment.authorName,
					moment: format.moment(comment.writtenAt),
					about: blockName(comment.blockId),
				})}
			</p>
			<p className="max-w-prose whitespace-pre-line">{comment.body}</p>
			{comment.resolvedAt ? (
				<p className="text-sm font-bold text-good">{t("comments.done")}</p>
			) : (
				<Form method="post" preventScrollReset className="mt-2">
					<input type="hidden" name="commentId" value={comment.commentId} />
					<Button kind="secondary" size="small" name="intent" value="resolve">
						{t("comments.resolve")}
					</Button>
				</Form>
			)}
		</li>
	);
}

function CommentForm({ blocks, sent }: Pick<CommentsProps, "blocks" | "sent">) {
	const { t } = useTranslation("report");
	const blockName = useBlockName(blocks);
	const problem = sent && "problems" in sent ? sent.problems?.find(({ field }) => field === "comment") : undefined;
	return (
		<Section level={3} title={t("comments.add")}>
			<Form method="post" noValidate preventScrollReset className="max-w-xl">
				<ChoiceField
					kind="select"
					name="block"
					legend={t("comments.about")}
					options={[
						{ value: "", label: t("comments.whole") },
						...blocks.map(({ id }) => ({ value: id, label: blockName(id) })),
					]}
				/>
				<TextField name="comment" label={t("comments.text")} multiline rows={3} maxLength={4000} problem={problem} />
				<Button kind="secondary" name="intent" value="comment">
					{t("comments.send")}
				</Button>
			</Form>
		</Section>
	);
}
