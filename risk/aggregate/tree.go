package aggregate

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"gonum.org/v1/gonum/graph"
	"gonum.org/v1/gonum/graph/simple"
	"gonum.org/v1/gonum/graph/topo"

	"nightbook/schema"
)

// node is a book in the tree.
type node struct {
	book, owner string
	parent      *node
	children    []*node // by name
	listed      bool
}

// tree is the book tree: the books table, the parents it names without listing
// them, and the books that only positions name.
type tree struct {
	nodes map[string]*node
}

// newTree builds the tree. A parent that has no row of its own stands at the
// top and is noted. Books that are their own ancestors are an error.
func newTree(rows []schema.BookRow) (*tree, []schema.Note, error) {
	t := &tree{map[string]*node{}}
	var notes []schema.Note
	for _, r := range rows {
		t.nodes[r.Book] = &node{book: r.Book, owner: r.Owner, listed: true}
	}
	for _, r := range rows {
		if r.Parent == "" {
			continue
		}
		parent, ok := t.nodes[r.Parent]
		if !ok {
			parent = t.add(r.Parent)
			notes = append(notes, notInTree(r.Parent, "books", r.Line))
		}
		t.nodes[r.Book].parent = parent
	}
	if loop := t.loop(rows); loop != nil {
		return nil, nil, fmt.Errorf("books: these books are their own ancestors: %s: mend the parent of one", strings.Join(loop, ", "))
	}
	for _, n := range t.nodes {
		if n.parent != nil {
			n.parent.children = append(n.parent.children, n)
		}
	}
	return t, notes, nil
}

func notInTree(book, file string, line int64) schema.Note {
	return schema.Note{Code: schema.BookNotInTree, Subject: book, File: file, Line: line, Count: 1,
		Message: fmt.Sprintf("book %s has no row in books: it is added up at the top of the tree", book)}
}

func (t *tree) add(book string) *node {
	n := &node{book: book}
	t.nodes[book] = n
	return n
}

// loop returns the books of a cycle, or nil.
func (t *tree) loop(rows []schema.BookRow) []string {
	g := simple.NewDirectedGraph()
	ids := map[string]int64{}
	id := func(n *node) graph.Node {
		if _, ok := ids[n.book]; !ok {
			ids[n.book] = int64(len(ids))
		}
		return simple.Node(ids[n.book])
	}
	for _, r := range rows {
		n := t.nodes[r.Book]
		if n.parent == n {
			return []string{r.Book}
		}
		if n.parent != nil {
			g.SetEdge(simple.Edge{F: id(n), T: id(n.parent)})
		}
	}
	_, err := topo.Sort(g)
	if err == nil {
		return nil
	}
	names := map[int64]string{}
	for name, n := range ids {
		names[n] = name
	}
	var first []string // of several, the one with the first name
	for _, nodes := range err.(topo.Unorderable) {
		var loop []string
		for _, n := range nodes {
			loop = append(loop, names[n.ID()])
		}
		slices.Sort(loop)
		if first == nil || loop[0] < first[0] {
			first = loop
		}
	}
	return first
}

// walk calls f for every book, depth first, children by name, with its level
// and its path.
func (t *tree) walk(f func(n *node, level int, path string)) {
	var roots []*node
	for _, n := range t.nodes {
		if n.parent == nil {
			roots = append(roots, n)
		}
	}
	walkAll(roots, 0, "", f)
}

func walkAll(nodes []*node, level int, above string, f func(*node, int, string)) {
	slices.SortFunc(nodes, func(a, b *node) int { return cmp.Compare(a.book, b.book) })
	for _, n := range nodes {
		path := above + n.book
		f(n, level, path)
		walkAll(n.children, level+1, path+" / ", f)
	}
}
