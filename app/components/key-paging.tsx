import { useTranslation } from "react-i18next";
import { Link, useSearchParams } from "react-router";
import { useFormat } from "#app/i18n/use-format.ts";
import type { PageByKey } from "#app/lib/page-by-key.ts";

type KeyPagingProps = Pick<PageByKey<unknown>, "before" | "after"> & {
	total: number;
	/** Where the list is longer than `total`, which is as far as it was counted. */
	moreThanTotal?: boolean;
	/** What the list's rows are called, and which way its pages go, where that can be said better. */
	words?: { total: string; before: string; after: string };
};

/** The pages beside this one, each from a row on: what comes or goes meanwhile moves none. Other search parameters stay. */
export function KeyPaging({ before, after, total, moreThanTotal = false, words }: KeyPagingProps) {
	const { t } = useTranslation();
	const format = useFormat();
	const [search] = useSearchParams();
	const to = (name?: "before" | "after", place?: string) => {
		const next = new URLSearchParams(search);
		next.delete("before");
		next.delete("after");
		if (name && place) next.set(name, place);
		return `?${next}`;
	};
	const count = { count: total, value: format.number(total) };
	const all = words?.total ?? t(moreThanTotal ? "paging.moreThan" : "paging.total", count);
	if (before === null && after === null) return <p className="mt-3 text-sm text-quiet">{all}</p>;
	const look = "inline-flex min-h-11 items-center";
	return (
		<nav aria-label={t("paging.label")} className="mt-3 flex flex-wrap items-center justify-between gap-3 text-sm">
			<p className="text-quiet">{all}</p>
			<ul className="flex flex-wrap gap-x-4">
				{before !== null && (
					<>
						<li>
							<Link to={to()} className={look}>
								{t("paging.first")}
							</Link>
						</li>
						<li>
							<Link rel="prev" to={to("before", before)} className={look}>
								← {words?.before ?? t("paging.previous")}
							</Link>
						</li>
					</>
				)}
				{after !== null && (
					<li>
						<Link rel="next" to={to("after", after)} className={look}>
							{words?.after ?? t("paging.next")} →
						</Link>
					</li>
				)}
			</ul>
		</nav>
	);
}
