/** A part of an identification field that a person reads before a file is stored. */
export interface IdentificationPart {
  name: string;
  value: string;
  /** Whether it can identify a person; a part that says "unknown" cannot. */
  identifies: boolean;
}

export interface Identification {
  patient: IdentificationPart[];
  recording: IdentificationPart[];
  identifies: boolean;
}

const PATIENT_OFFSET = 8;
const FIELD_BYTES = 80;
const RECORDING_OFFSET = PATIENT_OFFSET + FIELD_BYTES;

/** The subfields of EDF+ in their order (Kemp and Olivan 2003, 2.1.3.3 and 2.1.3.4). */
const PATIENT_PARTS = [
  { name: 'patient code', identifies: true },
  { name: 'sex', identifies: false },
  { name: 'birthdate', identifies: true },
  { name: 'patient name', identifies: true },
];
const RECORDING_PARTS = [
  { name: 'start date', identifies: false },
  { name: 'investigation code', identifies: true },
  { name: 'investigator or technician', identifies: true },
  { name: 'equipment', identifies: false },
];

/**
 * Splits the two identification fields into their subfields and says which can identify a person.
 * Plain EDF has no subfields: each field is one part, and identifies unless it is empty or X.
 */
export function identificationOf(header: {
  format: string;
  patient: string;
  recording: string;
}): Identification {
  const isPlain = header.format === 'EDF';
  const recordingText = header.recording.replace(/^Startdate\s+/, '');
  const patient = isPlain
    ? wholeField('patient', header.patient)
    : subfields(header.patient, PATIENT_PARTS);
  const recording = isPlain
    ? wholeField('recording', header.recording)
    : subfields(recordingText, RECORDING_PARTS);
  return {
    patient,
    recording,
    identifies: [...patient, ...recording].some((part) => part.identifies),
  };
}

function isUnknown(value: string): boolean {
  return /^[Xx\s]*$/.test(value);
}

function wholeField(name: string, value: string): IdentificationPart[] {
  return value === '' ? [] : [{ name, value, identifies: !isUnknown(value) }];
}

function subfields(
  text: string,
  parts: { name: string; identifies: boolean }[],
): IdentificationPart[] {
  const words = text.split(/\s+/).filter((word) => word !== '');
  const known = words.slice(0, parts.length).map((word, i) => ({
    name: parts[i].name,
    value: word.replaceAll('_', ' '),
    identifies: parts[i].identifies && !isUnknown(word),
  }));
  const more = words.slice(parts.length).join(' ').replaceAll('_', ' ');
  if (more === '') return known;
  // Free text after the subfields may hold anything.
  return [...known, { name: 'further text', value: more, identifies: !isUnknown(more) }];
}

/**
 * A copy of the header's bytes (at least its first 256) with the 160 identifying bytes replaced:
 * EDF+ keeps its form with X for each subfield, plain EDF is left blank.
 * @throws RangeError when fewer than 256 bytes are given.
 */
export function blankIdentification(headerBytes: Uint8Array): Uint8Array {
  if (headerBytes.length < 256) {
    throw new RangeError(
      `blankIdentification: headerBytes has ${headerBytes.length} bytes, needs at least 256`,
    );
  }
  const blanked = headerBytes.slice();
  const reserved = String.fromCharCode(...headerBytes.subarray(192, 196));
  const isPlus = reserved === 'EDF+';
  putText(blanked, PATIENT_OFFSET, isPlus ? 'X X X X' : '');
  putText(blanked, RECORDING_OFFSET, isPlus ? 'Startdate X X X X' : '');
  return blanked;
}

function putText(bytes: Uint8Array, offset: number, text: string): void {
  bytes.fill(0x20, offset, offset + FIELD_BYTES);
  for (let i = 0; i < text.length; i++) bytes[offset + i] = text.charCodeAt(i);
}
