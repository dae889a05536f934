/**
 * Electrode names of the international 10-20, 10-10 and 10-5 systems and of the usual reference and eye electrodes.
 * Sources: Klem et al. 1999, Electroencephalogr Clin Neurophysiol Suppl 52:3-6 (10-20); Oostenveld & Praamstra 2001,
 * Clin Neurophysiol 112:713-719 (10-10 and 10-5), both from memory; EOG and mastoid labels are common practice.
 */

const row = 'N|NF|FP|AFP|AF|AFF|F|FFC|FFT|FC|FT|FCC|FTT|C|T|CCP|TTP|CP|TP|CPP|TPP|P|PPO|PO|POO|O|OI|I'
const electrode = new RegExp(`^(?:${row})(?:Z|[1-9]|10)H?$`)
const other =
  /^(?:[AM][12]|CB[12]|[VH]?EOG[LRUD12]?|[LR]EOG|[LR][OV]?EOG|[LR]?MASTOID|LM|RM|IO[12]|SO[12]|NZ|IZ|ECG|EKG|REF|GND)$/
/** Numbered sensors of a net or a cap. */
const numbered = /^(?:E|EEG|MEG|CH|CHAN|CHANNEL|SENSOR|ELECTRODE|ELEC)[ _-]?\d{1,3}$/

/** Whether a name is an electrode's, with or without 'EEG ' before it, a reference behind it ('Cz-A1') or trailing dots. */
export function isElectrodeName(name: string): boolean {
  const bare = name
    .trim()
    .toUpperCase()
    .replace(/\.+$/, '')
    .replace(/^(?:EEG|ERP|CHANNEL|CHAN|CH)[ _:-]+(?=\D)/, '')
  if (numbered.test(bare)) return true
  const site = bare.replace(/[ _/-](?:A1|A2|M1|M2|LE|RE|REF|AVG?|LM|RM|AR|CAR)$/, '')
  return electrode.test(site) || other.test(site)
}
