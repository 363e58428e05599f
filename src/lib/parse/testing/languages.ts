import type { TestEncoding } from './dialect.ts';

/** Names of columns in the languages of the trade: time, lap, distance, speed, throttle, brake, steering, gear, engine speed, latitude, longitude, lateral, longitudinal acceleration. */
export const LANGUAGES: readonly {
	name: string;
	encoding: TestEncoding;
	delimiter: string;
	decimal: '.' | ',';
	headers: readonly string[];
}[] = [
	{
		name: 'English',
		encoding: 'utf-8',
		delimiter: ',',
		decimal: '.',
		headers: [
			'Elapsed Time (s)',
			'Lap Number',
			'Distance Travelled (m)',
			'Ground Speed (km/h)',
			'Throttle Position (%)',
			'Brake Pedal (%)',
			'Steering Wheel Angle (deg)',
			'Gear',
			'Engine RPM',
			'Latitude',
			'Longitude',
			'Lateral Acceleration (g)',
			'Longitudinal Acceleration (g)'
		]
	},
	{
		name: 'German',
		encoding: 'latin-1',
		delimiter: ';',
		decimal: ',',
		headers: [
			'Zeit [s]',
			'Rundenzähler',
			'Wegstrecke [m]',
			'Fahrgeschwindigkeit [km/h]',
			'Gaspedalstellung [%]',
			'Bremspedal [%]',
			'Lenkradwinkel [°]',
			'Gang',
			'Motordrehzahl [1/min]',
			'Breitengrad',
			'Längengrad',
			'Querbeschleunigung [g]',
			'Längsbeschleunigung [g]'
		]
	},
	{
		name: 'French',
		encoding: 'latin-1',
		delimiter: ';',
		decimal: ',',
		headers: [
			'Temps (s)',
			'Tour',
			'Distance parcourue (m)',
			'Vitesse (km/h)',
			'Accélérateur (%)',
			'Frein (%)',
			'Angle volant (°)',
			'Rapport engagé',
			'Régime moteur (tr/min)',
			'Latitude',
			'Longitude',
			'Accélération latérale (g)',
			'Accélération longitudinale (g)'
		]
	},
	{
		name: 'Spanish',
		encoding: 'utf-8',
		delimiter: ';',
		decimal: ',',
		headers: [
			'Tiempo (s)',
			'Vuelta',
			'Distancia (m)',
			'Velocidad (km/h)',
			'Acelerador (%)',
			'Freno (%)',
			'Ángulo del volante (°)',
			'Marcha',
			'Régimen del motor (rpm)',
			'Latitud',
			'Longitud',
			'Aceleración lateral (g)',
			'Aceleración longitudinal (g)'
		]
	},
	{
		name: 'Italian',
		encoding: 'utf-8 bom',
		delimiter: ';',
		decimal: ',',
		headers: [
			'Tempo (s)',
			'Giro',
			'Distanza (m)',
			'Velocità (km/h)',
			'Acceleratore (%)',
			'Freno (%)',
			'Angolo sterzo (°)',
			'Marcia',
			'Giri motore (rpm)',
			'Latitudine',
			'Longitudine',
			'Accelerazione laterale (g)',
			'Accelerazione longitudinale (g)'
		]
	},
	{
		name: 'Portuguese',
		encoding: 'utf-8',
		delimiter: ';',
		decimal: ',',
		headers: [
			'Tempo (s)',
			'Volta',
			'Distância (m)',
			'Velocidade (km/h)',
			'Acelerador (%)',
			'Travão (%)',
			'Ângulo do volante (°)',
			'Mudança',
			'Rotações do motor (rpm)',
			'Latitude',
			'Longitude',
			'Aceleração lateral (g)',
			'Aceleração longitudinal (g)'
		]
	},
	{
		name: 'Dutch',
		encoding: 'utf-8',
		delimiter: ';',
		decimal: ',',
		headers: [
			'Tijd (s)',
			'Ronde',
			'Afstand (m)',
			'Snelheid (km/h)',
			'Gaspedaal (%)',
			'Rempedaal (%)',
			'Stuurhoek (°)',
			'Versnelling',
			'Toerental (1/min)',
			'Breedtegraad',
			'Lengtegraad',
			'Dwarsversnelling (g)',
			'Langsversnelling (g)'
		]
	},
	{
		name: 'Polish',
		encoding: 'windows-1250',
		delimiter: ';',
		decimal: ',',
		headers: [
			'Czas [s]',
			'Okrążenie',
			'Dystans [m]',
			'Prędkość [km/h]',
			'Przepustnica [%]',
			'Hamulec [%]',
			'Kąt skrętu kierownicy [°]',
			'Bieg',
			'Obroty silnika [obr/min]',
			'Szerokość geograficzna',
			'Długość geograficzna',
			'Przyspieszenie poprzeczne [g]',
			'Przyspieszenie wzdłużne [g]'
		]
	},
	{
		name: 'Japanese',
		encoding: 'shift_jis',
		delimiter: ',',
		decimal: '.',
		headers: [
			'時間 (s)',
			'周回',
			'距離 (m)',
			'車速 (km/h)',
			'スロットル開度 (%)',
			'ブレーキ (%)',
			'操舵角 (deg)',
			'ギア',
			'エンジン回転数 (rpm)',
			'緯度',
			'経度',
			'横加速度 (G)',
			'前後加速度 (G)'
		]
	}
];
