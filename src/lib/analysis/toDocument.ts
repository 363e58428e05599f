import type {
	AnalysisDocument,
	Cell,
	Comparison,
	Corner,
	CornerMetrics,
	LockUp,
	SourceSummary,
	Warning
} from '../schemas/analysisDocument.ts';
import type { FadeWatch } from './car/fadeWatch.ts';
import type { CornerSpread, OwnBest } from './compare/ownBest.ts';
import type { RollingLap } from './compare/rollingLap.ts';
import type { Lap, ReferencePath } from './model.ts';

export interface DocumentParts {
	source: SourceSummary;
	warnings: Warning[];
	path: ReferencePath;
	laps: readonly Lap[];
	/** one row for each lap */
	cellS: (number | null)[][];
	corners: Corner[];
	cells: Cell[];
	metrics: CornerMetrics[];
	lockUps: LockUp[];
	theoreticalBestS: number | null;
	rollingBest: RollingLap | null;
	fade: FadeWatch | null;
	ownBest: OwnBest[];
	spreads: CornerSpread[];
	comparison: Comparison | null;
}

/** Long columns are printed to the tenth of a millimetre and to 0.1 µs: far below what they can mean, and half the bytes. */
const COLUMN_DIGITS = { metres: 4, seconds: 7 };

const rounded = (columns: ArrayLike<number>, digits: number): number[] => {
	const scale = 10 ** digits;
	return Array.from(columns, (value) => Math.round(value * scale) / scale);
};

/** The parts of an analysis as the JSON document that programs read. Warnings that say the same of the same row are one. */
export function toDocument(parts: DocumentParts): AnalysisDocument {
	const { source, path, laps, comparison } = parts;
	return {
		schema: 'kerbnote.analysis/1',
		source: { ...source, warnings: distinct([...source.warnings, ...parts.warnings]) },
		path: {
			lengthM: path.lengthM,
			stepM: 1,
			xM: rounded(path.xM, COLUMN_DIGITS.metres),
			yM: rounded(path.yM, COLUMN_DIGITS.metres),
			origin: path.origin,
			line: path.line
		},
		laps: laps.map((lap, i) => ({
			number: lap.number,
			kind: lap.kind,
			startS: lap.startS,
			timeS: lap.endS - lap.startS,
			lengthM: lap.lengthM,
			clean: lap.clean,
			reasons: lap.reasons,
			cellS: parts.cellS[i],
			plusMinusS: lap.plusMinusS
		})),
		corners: parts.corners,
		cells: parts.cells,
		metrics: parts.metrics,
		lockUps: parts.lockUps,
		theoreticalBestS: parts.theoreticalBestS,
		rollingBest: parts.rollingBest,
		fade: parts.fade,
		ownBest: parts.ownBest,
		spreads: parts.spreads,
		comparison: comparison && { ...comparison, delta: rounded(comparison.delta, COLUMN_DIGITS.seconds) }
	};
}

function distinct(warnings: Warning[]): Warning[] {
	const seen = new Set<string>();
	return warnings.filter(({ code, message, row }) => {
		const key = `${code} ${row} ${message}`;
		if (seen.has(key)) return false;
		seen.add(key);
		return true;
	});
}
