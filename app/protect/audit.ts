/** A withheld cell that can be worked out too closely. The key is for the desk; no value is told. */
export interface AuditFailure {
	cellKey: string;
	quantity: string;
	/** `solved`: known exactly; `narrow`: closer than its protection level; `by_owner`: by an owner who knows a part. */
	kind: "solved" | "narrow" | "by_owner";
}

/** What a reviewer may read: counts and relative widths, no withheld number. */
export interface AuditResult {
	passed: boolean;
	cells: number;
	withheld: number;
	withheldForOwnSake: number;
	shields: number;
	/** Width of the narrowest interval in multiples of what is asked (1 = just enough); null when nothing is withheld. */
	narrowest: number | null;
	/** How many withheld intervals (one per cell and quantity) fall in each class of that multiple. */
	widths: { under1: number; from1to2: number; from2to5: number; from5: number };
	failures: AuditFailure[];
	linearPrograms: number;
}
