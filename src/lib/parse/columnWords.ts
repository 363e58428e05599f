/**
 * What a word in a column's name can mean. Words are the trade's general terms and their usual abbreviations in English, German,
 * French, Spanish, Italian, Portuguese, Dutch, Polish and Japanese; rules on the concepts (recogniseColumns) are the same in every language.
 * Words are lower case, without accents (Japanese keeps its marks).
 */
const VOCABULARY = {
	time: 'czas czasu godzina time times t zeit zeiten zeitstempel temps tiempo tempo tijd timestamp timecode elapsed clock utc uhrzeit heure hora ora horodatage datetime secs seconds laufzeit 時間 時刻 タイム 経過',
	lap: 'okrazenie okrazenia okrazen okr lap laps runde runden tour tours vuelta vueltas giro giri volta voltas ronde rondes ronden ラップ 周回 周',
	last: 'ostatni ostatnie ostatniego poprzednie last letzte letzter letzten dernier derniere ultima ultimo ultimi laatste previous prev vorherige 前周 前回 前の',
	beacon: 'beacon beacons marker trigger transponder bake baken balise baliza faro ビーコン マーカー boa',
	number:
		'# number num no nr nummer zahl zahler count counter index numero nombre compteur contador contatore conteggio conta n teller id 番号 数 回数',
	distance:
		'dystans dystansu odleglosc droga drogi distance distances dist odometer odo strecke wegstrecke weg distanz entfernung distancia distanza percorso afstand afgelegd mileage 距離 走行',
	driven:
		'przebyta przebyty przejechana przejechany driven travelled traveled covered gefahren gefahrene parcourue recorrida recorrido percorsa percorrida totale total cumulative cum cumulee',
	speed:
		'predkosc predkosci szybkosc speed speeds velocity vel v geschwindigkeit geschw vitesse velocidad velocita velocidade snelheid 速度 車速 スピード spd vspeed',
	kmhWord: 'kmh kph mph',
	wheel:
		'kolo kola wheel wheels whl rad rader roue roues rueda ruedas ruota ruote roda rodas wiel wielen 車輪 輪 ホイール タイヤ ws',
	fl: 'fl lf vl avg dvi ai di fe la lv fgl 左前 前左',
	fr: 'fr rf vr avd dvd dd fd ad rv 右前 前右',
	rl: 'rl lr hl arg ti pi te al la lh 左後 後左',
	rr: 'rr hr ard td pd ra rh 右後 後右',
	front:
		'przod przedni przednie przedniego front frt vorn vorne vorder vorderer vorderrad avant delantero delantera del anteriore ant dianteiro dianteira voor voorrem 前 フロント f',
	rear: 'tyl tylny tylne tylnego rear back hinten hinterer hinter hinterrad arriere trasero trasera tras posteriore post traseiro traseira achter achterrem 後 リア リヤ',
	left: 'lewy lewe lewego left lft links linke gauche izquierda izquierdo izq sinistra sinistro sx esquerda esquerdo linker 左',
	right:
		'prawy prawe prawego right rgt rechts rechte droite droit derecha derecho der destra destro dx direita direito rechter 右',
	brake:
		'hamulec hamulca hamulcow hamowanie brake brakes braking brk bremse bremsen brems bremspedal frein freins freinage freno frenos frenada frenata freio freios freada travao rem remmen rempedaal ブレーキ 制動',
	pressure:
		'cisnienie cisnienia pressure press pres p druck pression presion pressione pressao druk 圧 圧力 油圧 mastercylinder',
	pedal: 'pedal pedale pedaal ペダル',
	position:
		'polozenie pozycja weg position pos stellung posicion posizione posicao stand positie 位置 開度 opening ouverture apertura abertura',
	force: 'sila nacisk force kraft effort fuerza forza forca kracht 踏力',
	throttle:
		'przepustnica przepustnicy throttle thr thrtl tps drosselklappe drossel papillon mariposa farfalla borboleta gasklep スロットル アクセル',
	accelerator:
		'gazu accelerator accelerateur accel acelerador acceleratore acelerador gas gaz gaspedal gaspedaal fahrpedal app',
	steering:
		'kierownica kierownicy skret skretu str steering steer steeringwheel lenkwinkel lenkung lenk lenkrad lenkradwinkel braquage volant volante direccion sterzo direcao stuur stuurhoek stuurwiel 操舵 舵 舵角 ハンドル ステアリング ステア',
	angle: 'kat kata einschlag uitslag angle ang winkel angulo angolo hoek 角 角度',
	gear: 'bieg biegu biegi mudanca cambio rapporto gear gears gang ganganzeige rapport marcha marcia versnelling ギア ギヤ シフト 変速',
	engine: 'silnik silnika engine eng motor moteur motore エンジン',
	revolutions:
		'obroty obrotow obrotowa rpm rpms revs rev drehzahl motordrehzahl regime tours regimen revoluciones giri rotacao rotacoes toerental toeren 回転 回転数 nmot ne',
	latitude: 'szerokosc szer latitude breite breitengrad latitud latitudine breedtegraad 緯度',
	latShort: 'lat',
	longitude: 'dlugosc dl longitude laenge lange langengrad laengengrad longitud longitudine lengtegraad 経度 lon lng',
	longShort: 'lon long lg',
	x: 'x px posx xpos',
	y: 'y py posy ypos',
	z: 'z pz posz zpos',
	east: 'east easting ost est este',
	north: 'north northing nord norte',
	altitude: 'wysokosc altitude alt height elevation hohe hoehe altura quota hoogte 高度 標高',
	heading: 'kierunek heading course bearing cog kurs kurswinkel cap rumbo prua rotta koers 方位 進行方向 hdg',
	acceleration:
		'przyspieszenie przyspieszenia przysp versnelling acceleration accelerations acc beschleunigung beschl aceleracion accelerazione aceleracao versnellings g gforce g-force 加速度 accel a',
	longitudinal:
		'wzdluzne wzdluzna wzdluz longitudinal laengs langs longitudinale longitudinaal inline forward fwd longit 前後 縦',
	lateral:
		'poprzeczne poprzeczna boczne boczna lateral quer laterale lateraal dwars transversal transversale trasversale sideways latacc 横 左右',
	vertical: 'vertical vert hoch verticale vertikal 上下',
	ax: 'ax accx gx',
	ay: 'ay accy gy',
	yaw: 'yaw gier lacet guinada imbardata guinada giro yawing gierwinkel ヨー',
	rate: 'rate raten geschwindigkeits レート 速 angular gyro gyroscope kreisel 角速度',
	yawRate: 'yawrate gierrate giergeschwindigkeit giersnelheid gierate gyroz gz ヨーレート',
	fuel: 'paliwo paliwa fuel kraftstoff tank tankinhalt carburant combustible carburante combustivel brandstof benzin essence benzina 燃料 残量',
	hemisphere: 'ns ew hemisphere',
	// concepts that take a column out of the running
	other:
		'temperature temp temps_ temperatur temperatura temperature_ torque moment couple par coppia limit target soll sollwert setpoint bias balance migration voltage volt current_ amps slip error err status state valid quality accuracy precision sat sats satellites nsat hdop pdop vdop oil ol huile aceite olio water wasser eau agua acqua coolant air luft clutch kupplung embrayage embrague frizione embreagem koppeling clt ride damper dampfer amortisseur potentiometer suspension light licht lamp lambda best beste meilleur mejor migliore melhor predicted prediction delta diff difference gap sector sektor secteur split wear disc disk pad fluid caliper steps step stint battery batterie humidity handbrake parking tyre tire reifen pneu neumatico pneumatico band boost ambient turbo wind radius rad_ km_left remaining restante flag note notes comment remark kommentar bemerkung 温度 水温 油温 トルク 電圧 クラッチ 燃圧 油 空気圧 備考 目標 raceposition rank power leistung puissance potencia potenza ecu map mode kerb ratio_ pit error_ ign ignition spark advance knock mean average avg_ max min maximum minimum std stddev predictive',
	// words that say nothing against any reading
	neutral:
		'session run stamp ecoule transcurrido trascorso decorrido verstreken geographique geografica geografico geografische geographische geografisch geographic geograficzna geograficznej geogr engage engagee inserita eingelegter current_gear fahr pojazdu samochodu gps gnss vehicle car ground sensor signal channel ch raw rohwert filtered filt smoothed actual act ist current corrected corr calc calculated calibrated total main primary first true real over in of the de du des del della di da do van von der die das le la el il au sur sul al en im pro und et y_ e instant value wert valeur valor valore measured pct percent fahrzeug auto wagen voiture coche vettura carro voertuig sog local world map_ coordinate coord coords utm wgs84 wgs84_ relative rel since start from running log logger data nmea deg decimal dec 現在 センサー センサ 車両 計測 度 値 対地 実 中心 body cg axis achse 1 0 a_ time_ elapsed_ 量 の 操作 方向'
} as const;

export type Concept = keyof typeof VOCABULARY;

const MEANINGS = new Map<string, Set<Concept>>();
let longestWord = 1;
for (const concept of Object.keys(VOCABULARY)) {
	if (!isConcept(concept)) continue;
	for (const word of VOCABULARY[concept].split(' ')) {
		const known = MEANINGS.get(word) ?? new Set<Concept>();
		known.add(concept);
		MEANINGS.set(word, known);
		longestWord = Math.max(longestWord, word.length);
	}
}

function isConcept(text: string): text is Concept {
	return text in VOCABULARY;
}

export interface HeaderMeaning {
	/** for each word, or each part of a compound, everything that it can mean */
	parts: ReadonlySet<Concept>[];
	/** words that mean nothing here */
	unknown: number;
}

/**
 * Takes a header's words apart into concepts. Compounds are split into the words they are made of ("Bremsdruck" → brake, pressure;
 * "wheelspeedfl" → wheel, speed, front left), whether the language writes them together or the exporter does.
 */
export function readHeaderWords(words: string): HeaderMeaning {
	const meaning: HeaderMeaning = { parts: [], unknown: 0 };
	for (const word of words.split(' ')) {
		if (word === '' || /^\d+$/.test(word)) continue;
		const parts = takeApart(word);
		if (parts.length === 0) meaning.unknown++;
		for (const part of parts) meaning.parts.push(MEANINGS.get(part) ?? new Set());
	}
	return meaning;
}

/** Shortest word that may be part of a compound; shorter ones (fl, rr, x) only stand alone or at a compound's end. */
const SHORTEST_PART = 3;
const LONGEST_COMPOUND = 48;

/** The words that make up a compound, covering all but its linking letters; [] where it is no compound of known words. */
function takeApart(word: string): string[] {
	if (MEANINGS.has(word)) return [word];
	if (word.length > LONGEST_COMPOUND) return [];
	const wideScript = /[\u3040-\u30ff\u4e00-\u9fff]/.test(word);
	const shortest = wideScript ? 1 : SHORTEST_PART;
	// best[i]: least letters left over in word[0, i), and the parts that reach it
	const best: { left: number; parts: string[] }[] = [{ left: 0, parts: [] }];
	for (let end = 1; end <= word.length; end++) {
		let choice = { left: best[end - 1].left + 1, parts: best[end - 1].parts };
		const least = end === word.length ? Math.min(2, shortest) : shortest;
		for (let length = least; length <= Math.min(longestWord, end); length++) {
			const part = word.slice(end - length, end);
			if (!MEANINGS.has(part)) continue;
			const before = best[end - length];
			if (before.left < choice.left || (before.left === choice.left && before.parts.length + 1 < choice.parts.length)) {
				choice = { left: before.left, parts: [...before.parts, part] };
			}
		}
		best.push(choice);
	}
	const { left, parts } = best[word.length];
	// German and Dutch link with up to two letters (Gang-s-anzeige); more left over is another word.
	return parts.length > 0 && left <= (wideScript ? word.length / 3 : Math.min(2, word.length / 4)) ? parts : [];
}
