import { useTranslation } from "react-i18next";
import { Link, useSearchParams } from "react-router";
import { useFormat } from "#app/i18n/use-format.ts";

type PagingProps = {
	page: number;
	pageCount: number;
	total: number;
	/** The part of the page that holds the list, where other things come before it. */
	part?: string;
};

/** Where one is in a long list. Other search parameters stay. */
export function Paging({ page, pageCount, total, part }: PagingProps) {
	const { t } = useTranslation();
	const format = useFormat();
	const [search] = useSearchParams();
	const to = (number: number) => {
		const next = new URLSearchParams(search);
		next.set("page", String(number));
		return `?${next}${part ? `#${part}` : ""}`;
	};
	const all = t("paging.total", { count: total, value: format.number(total) });
	if (pageCount <= 1) return <p className="mt-3 text-sm text-quiet">{all}</p>;
	return (
		<nav aria-label={t("paging.label")} className="mt-3 flex flex-wrap items-center justify-between gap-3 text-sm">
			<p className="text-quiet">
				{t("paging.where", { page: format.number(page), pageCount: format.number(pageCount) })} · {all}
			</p>
			<ul className="flex gap-4">
				{page > 1 && (
					<li>
						<Link rel="prev" to={to(page - 1)} className="inline-flex min-h-11 items-center">
							← {t("paging.previous")}
						</Link>
					</li>
				)}
				{page < pageCount && (
					<li>
						<Link rel="next" to={to(page + 1)} className="inline-flex min-h-11 items-center">
							{t("paging.next")} →
						</Link>
					</li>
				)}
			</ul>
		</nav>
	);
}
