/** What a live map shows of the ground. */
export type MapView = { longitude: number; latitude: number; zoom: number };

export type Viewer = {
	/** Tells of each move of the reader's; the answer stops it. */
	onMoved: (tell: (view: MapView) => void) => () => void;
	/** Shows another map's view, and tells nobody of it. */
	follow: (view: MapView) => void;
};
export type ViewLink = { join: (viewer: Viewer) => () => void };

/** Holds maps together: where one is moved the others go, and one that comes later goes where they are. */
export function linkViews(): ViewLink {
	const joined = new Set<Viewer>();
	let latest: MapView | undefined;
	return {
		join(viewer) {
			const stop = viewer.onMoved((view) => {
				latest = view;
				for (const other of joined) if (other !== viewer) other.follow(view);
			});
			joined.add(viewer);
			if (latest) viewer.follow(latest);
			return () => {
				stop();
				joined.delete(viewer);
				if (joined.size === 0) latest = undefined;
			};
		},
	};
}
