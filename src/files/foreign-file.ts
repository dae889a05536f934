/**
 * Recognises, from text that was decoded from a file, that the file is no table: what it looks like and what to do.
 */

const notTextTodo = 'Open a text table: CSV, TSV or semicolon-separated, in UTF-8.'

/** An EDF header carries its starting date and time, dd.mm.yyhh.mm.ss, at byte 168 (EDF specification, 1992). */
const edfStart = /^\d\d\.\d\d\.\d\d\d\d\.\d\d\.\d\d$/

/** What a text that cannot be a table looks like; undefined when it may be one. */
export function foreignFile(text: string): { looksLike: string; todo: string } | undefined {
  const head = text.slice(0, 4096)
  if (edfStart.test(head.slice(168, 184))) {
    return { looksLike: 'an EDF or BDF recording', todo: 'Open it as a recording: the file name has to end in .edf.' }
  }
  if (head.startsWith('PK\u0003\u0004')) {
    return {
      looksLike: 'a spreadsheet workbook (xlsx, ods) or another zip archive',
      todo: 'Open it in the spreadsheet program and save the sheet as CSV (UTF-8).',
    }
  }
  // The signatures D0 CF 11 E0 and 1F 8B; decoded as UTF-8, bytes that are no text become replacement characters.
  if (['\u00d0\u00cf\u0011\u00e0', '\ufffd\ufffd\u0011\ufffd'].some((signature) => head.startsWith(signature))) {
    return { looksLike: 'a spreadsheet workbook (xls)', todo: 'Save the sheet as CSV (UTF-8).' }
  }
  if (['\u001f\u008b', '\u001f\ufffd'].some((signature) => head.startsWith(signature))) {
    return { looksLike: 'a gzip archive', todo: 'Unpack it and open the table.' }
  }
  if (head.startsWith('%PDF')) return { looksLike: 'a PDF document', todo: notTextTodo }
  if (/^\s*<(!doctype|html|\?xml)/i.test(head)) return { looksLike: 'a web page or an XML file', todo: notTextTodo }
  if (/^\s*(\{\s*["}]|\[\s*[[{])/.test(head)) return { looksLike: 'a JSON file', todo: notTextTodo }
  let zeros = 0
  let strange = 0
  for (let i = 0; i < head.length; i++) {
    const c = head.charCodeAt(i)
    if (c === 0) zeros++
    else if ((c < 32 && c !== 9 && c !== 10 && c !== 13 && c !== 12) || c === 0xfffd) strange++
  }
  if (zeros > 0.3 * head.length && zeros < 0.7 * head.length && strange < 0.05 * head.length) {
    return { looksLike: 'a text in UTF-16', todo: 'Save it as UTF-8 and open it again.' }
  }
  if (zeros > 0 || strange > 0.02 * head.length + 4) return { looksLike: 'a binary file', todo: notTextTodo }
  return undefined
}
