/** The look of the button that a browser puts into a box for files. */
export const fileButton =
	"file:mr-4 file:min-h-11 file:rounded-plat file:border-2 file:border-damson file:bg-paper file:px-5 file:py-2 file:font-bold file:text-damson";
