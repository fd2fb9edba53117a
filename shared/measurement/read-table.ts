import type { TableReading } from '../schemas/measurement'
import { toSource, type ByteSource } from './byte-source'
import { readPoints } from './read-points'
import { toSpectrum, type Spectrum } from './to-spectrum'

/**
 * Reads a delimited text file as a spectrum, exactly as the reading says.
 *
 * @param input the file's bytes, or a source of them piece by piece
 * @param reading how the file is to be read, confirmed by a person
 * @returns ascending energies in meV with values and uncertainties; points of equal energy are averaged. Wavelengths
 *   become energies by E = hc / lambda (air wavelengths are turned into vacuum ones first); with `applyJacobian` values
 *   and uncertainties are multiplied by lambda^2 / (hc), which turns a density per nm into one per meV
 *   (J. Mooney, P. Kambhampati, J. Phys. Chem. Lett. 4, 3316 (2013)).
 * @throws AppError `measurement/unreadable` naming line, column, what was found and what is expected
 */
export const readTable = (input: Uint8Array | ByteSource, reading: TableReading): Spectrum =>
  toSpectrum(readPoints(toSource(input), reading), reading)
