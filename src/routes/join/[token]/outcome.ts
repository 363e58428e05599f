/** What the last form of the page was told; every field only where it applies. */
export interface JoinOutcome {
	problem?: string;
	issues?: Record<string, string[] | undefined>;
	kept?: { name: string; age: string; guardianEmail: string };
}
