import { SketchWork, type SketchOrder, type SketchReport } from './sketch-work';

// A thread of its own: the form is never held up, and leaving the page ends it.
const work = new SketchWork(
  (report: SketchReport) => postMessage(report),
  (go) => setTimeout(go),
);
addEventListener('message', ({ data }: MessageEvent<SketchOrder>) => work.take(data));
