// Entry of the module for memory that threads share.
export { advance } from './sweep.as';
export { bandCells, bandStep } from './threads.as';
