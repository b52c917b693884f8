import { useEffect, useRef, useState } from "react";
import { Link } from "react-router";
import { drawTree, isFoldable, LANE, type DrawnNode, type TreeEdgeView, type TreeNodeView } from "#app/components/revision-tree-layout.ts";

export type { TreeEdgeView, TreeNodeView };

export interface RevisionTreeProps {
  /** Oldest first. */
  nodes: TreeNodeView[];
  edges: TreeEdgeView[];
  /** Offers the next one at the end of the line. */
  add?: { href: string; label: string; text?: string };
}

/** The revisions of a part along the top of its sheet, oldest left, branches below their parent. */
export function RevisionTree({ nodes, edges, add }: RevisionTreeProps) {
  const [folded, setFolded] = useState(true);
  const scroller = useRef<HTMLDivElement>(null);
  const currentId = nodes.find((node) => node.current)?.id;
  const tree = drawTree(nodes, edges, folded);
  const current = tree.nodes.find((node) => node.id === currentId);
  const currentX = current?.x ?? 0;
  const width = tree.width + (add ? 200 : 0);

  useEffect(() => {
    const box = scroller.current;
    if (box) box.scrollLeft = currentX - box.clientWidth / 2;
  }, [currentX]);

  const last = tree.nodes.findLast((node) => node.lane === 0);
  return (
    <nav aria-label="Revisions of this part" className="relative">
      <div ref={scroller} className="overflow-x-auto overflow-y-hidden">
        <svg width={width} height={tree.height} className="block">
          {add && last && <path d={`M${last.x} ${last.y}H${width}`} className="stroke-rule" strokeWidth="1.5" strokeDasharray="5 4" />}
          {tree.paths.map(({ d }) => (
            <path key={d} d={d} className="fill-none stroke-ink" strokeWidth="1.75" />
          ))}
          {tree.nodes.map((node) => (
            <TreeNode key={node.id} node={node} />
          ))}
          {add && last && (
            <foreignObject x={tree.width - 8} y={last.y + 8} width="190" height={LANE - 16}>
              <Link to={add.href} className="word inline-flex min-h-6 items-center">
                {add.label}
              </Link>
              {add.text && <p className="text-sm/tight text-soft">{add.text}</p>}
            </foreignObject>
          )}
        </svg>
      </div>
      {isFoldable(nodes) && (
        <button type="button" onClick={() => setFolded(!folded)} className="word absolute bottom-0 right-2 min-h-11 bg-sheet px-2 text-sm">
          {folded ? "Spread out" : "Fold"}
        </button>
      )}
    </nav>
  );
}

function TreeNode({ node }: { node: DrawnNode }) {
  const { x, y, label, branchName, status, changeText, current, setAside, narrow, width, href } = node;
  const radius = current ? 9.5 : 7;
  return (
    <g>
      <circle
        cx={x}
        cy={y}
        r={radius}
        className={`${current ? "fill-blue" : "fill-sheet"} stroke-ink`}
        strokeWidth={current ? 2 : 1.75}
        strokeDasharray={setAside ? "3.4 2.4" : undefined}
      />
      <foreignObject x={x - 10} y={y + 12} width={width + 8} height={LANE - 20}>
        <Link to={href} aria-current={current ? "page" : undefined} title={narrow ? changeText : undefined} className="group block px-0.5 outline-offset-[-2px]">
          <span className="flex items-baseline gap-1.5">
            <span className={`font-semibold group-hover:text-blue ${current ? "text-xl/6" : ""}`}>{label}</span>
            <span className="truncate font-label text-label font-medium text-soft">
              {branchName && <span className="text-ink">{branchName} </span>}
              {status}
            </span>
          </span>
          {!narrow && <span className="line-clamp-2 text-sm/snug text-soft">{changeText}</span>}
        </Link>
      </foreignObject>
    </g>
  );
}
