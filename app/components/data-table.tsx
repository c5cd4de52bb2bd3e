import { type ReactNode, useId } from "react";
import { useTranslation } from "react-i18next";
import { Link, useSearchParams } from "react-router";
import { classes } from "./classes.ts";

export type Column<Row> = {
	key: string;
	header: ReactNode;
	numeric?: boolean;
	sortable?: boolean;
	cell: (row: Row) => ReactNode;
};
export type Sort = { key: string; direction: "asc" | "desc" };
type DataTableProps<Row> = {
	caption: string;
	columns: Column<Row>[];
	rows: Row[];
	rowKey: (row: Row) => string;
	sort?: Sort;
	empty?: ReactNode;
	captionHidden?: boolean;
	/** Rows that are left out on paper. */
	screenOnly?: (row: Row) => boolean;
};

/** A ledger: rows of one kind, the first column naming each. Too wide, it scrolls in itself and the page stays still. */
export function DataTable<Row>(props: DataTableProps<Row>) {
	const { caption, columns, rows, rowKey, sort, empty, captionHidden, screenOnly } = props;
	const { t } = useTranslation();
	const captionId = useId();
	if (rows.length === 0) return <>{empty ?? <p className="text-quiet">{t("table.empty")}</p>}</>;
	return (
		<section
			aria-labelledby={captionId}
			// Scrolled by keyboard only while in focus; holds what is only read out, which would stretch the page below it. What
			// comes into focus is scrolled clear of the head, which may be of several lines.
			// oxlint-disable-next-line jsx-a11y/no-noninteractive-tabindex
			tabIndex={0}
			className="relative max-h-[80vh] scroll-pt-24 overflow-auto border-y-2 border-line print:max-h-none print:overflow-visible"
		>
			<table className="w-full border-collapse text-sm">
				<caption
					id={captionId}
					className={classes("text-left", captionHidden ? "sr-only" : "pb-2 pt-3 text-base font-bold")}
				>
					{caption}
				</caption>
				<thead>
					<tr>
						{columns.map((column) => (
							<HeaderCell key={column.key} column={column} sort={sort} />
						))}
					</tr>
				</thead>
				<tbody>
					{rows.map((row) => (
						<tr
							key={rowKey(row)}
							className={classes(
								"border-b border-rule last:border-b-0 hover:bg-sheet",
								screenOnly?.(row) && "no-print",
							)}
						>
							{columns.map((column, index) => (
								<BodyCell key={column.key} column={column} first={index === 0}>
									{column.cell(row)}
								</BodyCell>
							))}
						</tr>
					))}
				</tbody>
			</table>
		</section>
	);
}

type HeaderCellProps<Row> = { column: Column<Row>; sort?: Sort };

function HeaderCell<Row>({ column, sort }: HeaderCellProps<Row>) {
	const { t } = useTranslation();
	const [search] = useSearchParams();
	const sorted = sort?.key === column.key ? sort.direction : undefined;
	const next = new URLSearchParams(search);
	next.set("sort", column.key);
	next.set("direction", sorted === "asc" ? "desc" : "asc");
	for (const page of ["page", "before", "after"]) next.delete(page);
	return (
		<th
			scope="col"
			aria-sort={sorted && (sorted === "asc" ? "ascending" : "descending")}
			className={classes(
				"sticky top-0 z-10 bg-paper px-3 py-2 align-bottom font-bold max-sm:px-2 shadow-[inset_0_-1px_0_var(--color-line)]",
				column.numeric ? "text-right" : "text-left",
			)}
		>
			{column.sortable ? (
				<Link
					to={`?${next}`}
					preventScrollReset
					className="print-plain inline-flex min-h-6 items-center gap-1 text-ink"
				>
					{column.header}
					<span aria-hidden="true" className={sorted ? "text-damson" : "no-print text-field"}>
						{sorted === "asc" ? "▲" : sorted === "desc" ? "▼" : "↕"}
					</span>
					<span className="sr-only">{t(sorted === "asc" ? "table.sortDown" : "table.sortUp")}</span>
				</Link>
			) : (
				column.header
			)}
		</th>
	);
}

type BodyCellProps<Row> = { column: Column<Row>; first: boolean; children: ReactNode };

function BodyCell<Row>({ column, first, children }: BodyCellProps<Row>) {
	const look = classes("px-3 py-2 align-top max-sm:px-2", column.numeric ? "text-right" : "text-left");
	if (!first) return <td className={look}>{children}</td>;
	return (
		<th scope="row" className={classes(look, "min-w-24 font-normal sm:min-w-36")}>
			{children}
		</th>
	);
}
