import { CdkNestedTreeNode, CdkTree, CdkTreeNodeDef, CdkTreeNodeOutlet } from '@angular/cdk/tree';
import {
  afterRenderEffect,
  ChangeDetectionStrategy,
  Component,
  computed,
  inject,
  input,
  model,
  viewChild,
} from '@angular/core';
import { Router, RouterLink } from '@angular/router';
import { toObservable } from '@angular/core/rxjs-interop';
import type { RunSummary } from '@halfdeep/contracts';
import { map } from 'rxjs';
import { StateSign } from '../../shared/state-sign/state-sign';
import { changesAbove, descentOf, outcomeBelow, shareDone, type DescentNode } from './descent';

const flattened = (nodes: readonly DescentNode[]): DescentNode[] =>
  nodes.flatMap((node) => [node, ...flattened(node.children)]);

/**
 * The descent of runs as course lines: what was changed stands above each line, what it did below, the run at its end.
 * A tree for the keyboard: arrows move, Enter opens the run; the run that has the focus is the chosen one.
 */
@Component({
  selector: 'app-descent-tree',
  imports: [CdkNestedTreeNode, CdkTree, CdkTreeNodeDef, CdkTreeNodeOutlet, RouterLink, StateSign],
  templateUrl: './descent-tree.html',
  styleUrl: './descent-tree.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DescentTree {
  private readonly router = inject(Router);
  readonly runs = input.required<readonly RunSummary[]>();
  /** Id of the chosen run. */
  readonly chosen = model<string | null>(null);
  protected readonly tree = viewChild.required(CdkTree<DescentNode, string>);

  protected readonly byId = computed(() => new Map(this.runs().map((run) => [run.id, run] as const)));
  /** Only a new or a deleted run makes a new tree: progress leaves it, and the focus in it, alone. */
  protected readonly roots = computed(() => descentOf(this.runs()), {
    equal: (a, b) => JSON.stringify(a) === JSON.stringify(b),
  });
  /** Every node by id, so that children can be watched: a tree that stays takes new runs in. */
  private readonly nodes = computed(() => new Map(flattened(this.roots()).map((node) => [node.id, node] as const)));
  private readonly nodeChanges = toObservable(this.nodes);
  protected readonly childrenOf = (node: DescentNode) =>
    this.nodeChanges.pipe(map((nodes) => nodes.get(node.id)?.children ?? []));
  protected readonly hasChildren = (id: string) => (this.nodes().get(id)?.children.length ?? 0) > 0;
  protected readonly idOf = (node: DescentNode) => node.id;
  protected readonly above = changesAbove;
  protected readonly below = outcomeBelow;
  protected readonly share = shareDone;

  constructor() {
    afterRenderEffect(() => {
      // A run without children is not open: the left arrow must lead from it to its parent at once.
      for (const node of this.nodes().values()) if (node.children.length > 0) this.tree().expand(node);
    });
  }

  protected open(node: DescentNode): void {
    void this.router.navigate(['/runs', node.id]);
  }

  protected choose(event: Event, node: DescentNode): void {
    event.stopPropagation(); // the parents of a node hear it too
    this.chosen.set(node.id);
  }

  /** What a screen reader says of a node. */
  protected spoken(run: RunSummary): string {
    const changes = run.parentRunId === null ? '' : `; changes ${changesAbove(run).join(', ')}`;
    return `${run.label}, ${run.state}, ${outcomeBelow(run)}${changes}`;
  }
}
