/** Words for the choices a rig holds, whose keys are made for files rather than for reading. */
const OPTION_WORDS: Readonly<Record<string, string>> = {
  deadrise: 'V bottom',
  bilge: 'Round bilge',
  none: 'None',
  fin: 'Fin',
  firm: 'Flat feet',
  edge: 'Edge',
  point: 'Point',
  rocker: 'Rocker',
  float: 'Afloat',
  servo: 'Servo',
  geared: 'Geared',
  free: 'Free',
  locked: 'Locked',
  held: 'Held',
  coasting: 'Coasting',
  actuated: 'Actuator',
  open: 'Open',
  shrouded: 'Shrouded',
  evacuated: 'Evacuated',
  disc: 'Disc',
  rim: 'Rim',
  hub: 'Hub',
  balls: 'Balls',
  bolts: 'Bolts',
  stand: 'Stand',
  pattern: 'Steps',
  keyframes: 'Keyframes',
  shove: 'Shove',
  sideLoad: 'Side load',
  payload: 'Payload',
  slope: 'Slope',
  turn: 'Turn',
  shake: 'Shaken floor',
  waves: 'Regular waves',
  sea: 'Irregular sea',
  recorded: 'Recorded moment',
  complementary: 'Complementary',
  kalman: 'Kalman',
  bretschneider: 'Bretschneider',
  jonswap: 'JONSWAP',
  '1': 'Right-handed',
  '-1': 'Left-handed',
};

const KEY_WORDS: Readonly<Record<string, string>> = {
  name: 'Name',
  legs: 'Legs',
  material: 'Material',
  sense: 'Spin',
  pattern: 'Pattern',
  spectrum: 'Spectrum',
  section: 'Section',
  keel: 'Keel',
  footing: 'Footing',
  drive: 'Gimbal drive',
  spin: 'Wheel speed is',
  housing: 'Housing',
  estimator: 'Estimator',
  gait: 'Gait',
};

const capital = (word: string): string => word.charAt(0).toUpperCase() + word.slice(1);

export const optionWords = (option: string | number): string =>
  typeof option === 'number' && Math.abs(option) > 1
    ? String(option)
    : (OPTION_WORDS[option] ?? capital(String(option)));

export const keyWords = (key: string): string => KEY_WORDS[key] ?? capital(key);
