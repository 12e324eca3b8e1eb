// Entry of the module for memory that threads share.
export { advance } from './sweep.as';
export { band, call, serve } from './threads.as';
