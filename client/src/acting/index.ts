// What the commands run, in a bundle of its own on the desktop.
export { copyPairTable } from './copy-pair-table';
export { addDipoles, chooseMedium, chooseTemperature, insertHeader } from './file-edits';
export { explain, openSample } from './sample';
export { writeDimers } from './write-dimers';
