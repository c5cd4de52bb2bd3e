import { useTranslation } from "react-i18next";
import { Form, href } from "react-router";
import { Button } from "#app/components/button.tsx";

type FollowButtonProps = {
	seriesId: string;
	/** Said to who hears the button without its row. */
	named: string;
	following: boolean;
	/** The release on whose page it stands; elsewhere it leads back to the data room. */
	release?: number;
};

/** One press follows a release, or ends that. */
export function FollowButton({ seriesId, named, following, release }: FollowButtonProps) {
	const { t } = useTranslation("dataroom");
	return (
		<Form method="post" action={href("/dataroom/follow")} className="no-print">
			<input type="hidden" name="seriesId" value={seriesId} />
			{release !== undefined && <input type="hidden" name="release" value={release} />}
			<Button
				kind="secondary"
				size={release === undefined ? "small" : "normal"}
				name="intent"
				value={following ? "unfollow" : "follow"}
				aria-label={t(following ? "follow.stopNamed" : "follow.startNamed", { named })}
			>
				{t(following ? "follow.stop" : "follow.start")}
			</Button>
		</Form>
	);
}
