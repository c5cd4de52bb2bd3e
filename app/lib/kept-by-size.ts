/** What was made once and may be wanted again, up to a size in all. What was asked for longest ago goes first. */
export class KeptBySize<T> {
	readonly #kept = new Map<string, { value: T; size: number }>();
	readonly #most: { inAll: number; each: number };
	#size = 0;

	constructor(most: { inAll: number; each: number }) {
		this.#most = most;
	}

	get(key: string): T | undefined {
		const known = this.#kept.get(key);
		if (!known) return undefined;
		this.#kept.delete(key);
		this.#kept.set(key, known);
		return known.value;
	}

	/** Keeps it, unless it is too large by itself or was kept meanwhile. */
	keep(key: string, value: T, size: number): void {
		if (size > this.#most.each || this.#kept.has(key)) return;
		this.#kept.set(key, { value, size });
		this.#size += size;
		for (const oldest of this.#kept.keys()) {
			if (this.#size <= this.#most.inAll) return;
			this.drop(oldest);
		}
	}

	drop(key: string): void {
		this.#size -= this.#kept.get(key)?.size ?? 0;
		this.#kept.delete(key);
	}
}
