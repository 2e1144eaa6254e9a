/** What each command of the editor does, for whoever reads of it before using it. */
export const COMMAND_DOCS: Readonly<Record<string, string>> = {
  'polewise.openPanel': 'Opens the panel of pairs beside the text, or brings it to the front.',
  'polewise.writeDimers':
    'Writes pairs of the frame at the cursor as files of their own, as `polewise dimers` does: those to compute, those to compute or review, or chosen from a list. Asks for the folder, and before it overwrites.',
  'polewise.copyPairTable':
    'Puts the pair table of the frame at the cursor on the clipboard, as `polewise pairs --format csv` prints it.',
  'polewise.insertHeader': 'Annotates the frame at the cursor with the keys that it lacks.',
  'polewise.addDipoles':
    'Writes the dipoles in use into the frame at the cursor, for every fragment whose dipole it does not give.',
  'polewise.chooseTemperature': 'Asks for a temperature and writes it into the file.',
  'polewise.chooseMedium': 'Offers the [media](#media) and a number, and writes the choice into the file.',
  'polewise.explain': 'Shows the hover of the line at the cursor.',
  'polewise.openSample': 'Opens a small cluster as an unsaved text, to try things on.',
};
