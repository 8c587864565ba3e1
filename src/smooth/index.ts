export { smoothTrack, type SmoothedTrack, type SmoothOptions } from './smooth-track.js';
export { type FixRejection } from './rejections.js';
export { attachInstruments, type ResampleOptions } from './instruments.js';
export { receiverDisplacementSe, DEFAULT_NOISE, type TrackNoise } from './noise.js';
