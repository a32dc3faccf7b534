/** The overview of a recording: min, max and mean of every channel over buckets of 64, 512, 4096 ... samples. */
export { bucketSamples, chooseSource, pyramidFactor, pyramidLevels } from './pyramid-levels';
export type { WindowSource } from './pyramid-levels';
export { decodePyramidBlock, encodePyramidBlock } from './pyramid-block';
export type { PyramidBlock } from './pyramid-block';
export { bucketsPerBlock, createPyramidBuilder } from './pyramid-builder';
export type { PyramidBuilder } from './pyramid-builder';
export { bandsFromBlocks, bandsFromChunks, samplesFromChunks } from './window';
export type { BandWindow, SampleWindow } from './window';
