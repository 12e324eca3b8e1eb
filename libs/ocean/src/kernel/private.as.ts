// Entry of the module for memory of one thread.
export { advance } from './sweep.as';
