import { BOHR_A } from '../../physics/constants';
import { convertedLengths } from '../rewrite/convert-lengths';
import { offered, type RemedyMaker } from './remedy';

const NANOMETRE_A = 10;

/** Converts all coordinates of the frame to Å. */
export const fromBohr: RemedyMaker = (_, { file, frame }) =>
  offered('Convert the coordinates from bohr to Å', convertedLengths(file, frame.model.tree, BOHR_A));

export const fromNanometres: RemedyMaker = (_, { file, frame }) =>
  offered('Convert the coordinates from nm to Å', convertedLengths(file, frame.model.tree, NANOMETRE_A));
