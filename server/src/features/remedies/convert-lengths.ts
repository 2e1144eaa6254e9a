import { BOHR_A } from '../../physics/constants';
import { lengthConversion } from '../rewrite/convert-lengths';
import type { RemedyMaker } from './remedy';

const NANOMETRE_A = 10;

/** Converts all coordinates of the frame to Å. */
function from(unit: string, factor: number): RemedyMaker {
  return (_, { file, frame }) => {
    const edits = lengthConversion(file, frame.model.tree, factor);
    return edits === null ? [] : [{ title: `Convert the coordinates from ${unit} to Å`, edits }];
  };
}

export const fromBohr = from('bohr', BOHR_A);
export const fromNanometres = from('nm', NANOMETRE_A);
