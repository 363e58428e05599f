/** A corner of an invented circuit: a vertex of the polygon of its straights, rounded with a radius. */
export interface DemoVertex {
	xM: number;
	yM: number;
	radiusM: number;
	name: string;
}

export interface DemoCircuit {
	circuit: string;
	layout: string;
	/** start/finish lies at (0, 0), heading along the first straight */
	vertices: DemoVertex[];
	/** where the invented place lies: open sea, so that it is nobody's circuit */
	latitudeDeg: number;
	longitudeDeg: number;
}

const vertices = (rows: [number, number, number, string][]): DemoVertex[] =>
	rows.map(([xM, yM, radiusM, name]) => ({ xM, yM, radiusM, name }));

export const VALLMERE_GRAND_PRIX: DemoCircuit = {
	circuit: 'Vallmere Park',
	layout: 'grand prix',
	latitudeDeg: 47.312,
	longitudeDeg: -29.541,
	vertices: vertices([
		[130, 0, 55, 'Fernside'],
		[165.7, -67.1, 40, 'Sallow'],
		[248.9, -55.4, 70, 'Ridge End'],
		[457.3, -230.2, 18, 'Tern Hairpin'],
		[248.5, -219.3, 30, 'Weir'],
		[261, -577, 45, 'Long Meadow'],
		[514, -635, 60, 'Orchard'],
		[502, -865, 38, 'Lime Kiln'],
		[-200, -853, 62, 'Old Barn'],
		[76, -536, 36, 'Millrace'],
		[-420, -176, 52, 'Heron'],
		[-389, 0, 40, 'Gatehouse']
	])
};

export const VALLMERE_SHORT: DemoCircuit = {
	circuit: 'Vallmere Park',
	layout: 'short',
	latitudeDeg: 47.312,
	longitudeDeg: -29.541,
	vertices: vertices([
		[130, 0, 55, 'Fernside'],
		[165.7, -67.1, 40, 'Sallow'],
		[248.9, -55.4, 70, 'Ridge End'],
		[457.3, -230.2, 18, 'Tern Hairpin'],
		[-150, -330, 48, 'Crossbar'],
		[-420, -176, 52, 'Heron'],
		[-389, 0, 40, 'Gatehouse']
	])
};

export const TERN_HOLLOW: DemoCircuit = {
	circuit: 'Tern Hollow',
	layout: 'kart',
	latitudeDeg: 47.318,
	longitudeDeg: -29.562,
	vertices: vertices([
		[120, 0, 18, 'Boathouse'],
		[150, -72, 14, 'Reed'],
		[92, -96, 11, 'Otter'],
		[124, -158, 13, 'Slipway'],
		[38, -192, 20, 'Long Bank'],
		[-62, -128, 12, 'Stile'],
		[-24, -82, 10, 'Cattail'],
		[-112, -46, 15, 'Alder'],
		[-98, 0, 14, 'Ferry']
	])
};
