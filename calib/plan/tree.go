package plan

import (
	"bytes"
	"fmt"
	"sort"

	"github.com/pelletier/go-toml/v2/unstable"
)

// node is a table, a list or a scalar of the TOML file, with the line it stands on.
type node struct {
	kind   unstable.Kind // Table (also inline), Array (also of tables) or a scalar's
	line   int           // of the key; of the value itself within a list; of the header of a table
	text   string        // of a scalar: what a string says, else as it is written
	key    string        // in the parent, where that is a table
	index  int           // in the parent, from 1, where that is a list
	parent *node
	keys   []string // of a table, in the order of the file
	fields map[string]*node
	items  []*node
}

// where is the path by which faults call a node: arm[2].value.tolerance.
func (n *node) where() string {
	switch {
	case n.parent == nil:
		return ""
	case n.parent.kind == unstable.Array:
		return fmt.Sprintf("%s[%d]", n.parent.where(), n.index)
	case n.parent.parent == nil:
		return n.key
	}
	return n.parent.where() + "." + n.key
}

// owner says whose a node is, in the words of the plan: arm "box"; "" where it is no entry of a list with a name.
func (n *node) owner() string {
	for ; n.parent != nil && n.parent.parent != nil; n = n.parent {
		if n.parent.parent.parent == nil && n.parent.kind == unstable.Array && n.kind == unstable.Table {
			if name := n.fields["name"]; name != nil && name.kind == unstable.String && name.text != "" {
				kind := n.parent.key
				if kind == "steps" {
					kind = "block"
				}
				return fmt.Sprintf("%s %q", kind, name.text)
			}
		}
	}
	return ""
}

// what says what a node is, for messages.
func (n *node) what() string {
	switch n.kind {
	case unstable.Table:
		return "a table"
	case unstable.Array:
		return "a list"
	case unstable.String:
		return fmt.Sprintf("%q", n.text)
	case unstable.Bool, unstable.Integer, unstable.Float:
		return n.text
	}
	return "the date " + n.text
}

func (n *node) addField(key string, kind unstable.Kind, line int) *node {
	c := &node{kind: kind, line: line, key: key, parent: n}
	if n.fields == nil {
		n.fields = map[string]*node{}
	}
	if n.fields[key] == nil {
		n.keys = append(n.keys, key)
	}
	n.fields[key] = c
	return c
}

func (n *node) addItem(kind unstable.Kind, line int) *node {
	c := &node{kind: kind, line: line, index: len(n.items) + 1, parent: n}
	n.items = append(n.items, c)
	return c
}

// treeBuilder turns the parser's expressions into nodes. go-toml's decoder knows whether a file is sound but forgets where its keys
// stand; its parser knows the place of each key but not what a header means. So the decoder judges and this builds.
type treeBuilder struct {
	parser   unstable.Parser
	newlines []int // offsets
	root     *node
	repeated *node // the first key that was given twice
}

// buildTree is the tree of a file, as far as its syntax is sound.
func buildTree(source []byte) *treeBuilder {
	b := &treeBuilder{root: &node{kind: unstable.Table}}
	for i, c := range source {
		if c == '\n' {
			b.newlines = append(b.newlines, i)
		}
	}
	b.parser.Reset(bytes.Clone(source)) // its nodes refer to the input; a clone has no spare capacity to mislead its offsets
	at := b.root
	for b.parser.NextExpression() {
		e := b.parser.Expression()
		switch e.Kind {
		case unstable.Table:
			at = b.root
			for it := e.Key(); it.Next(); {
				at = b.descend(at, it.Node())
				if it.IsLast() {
					at.line = b.line(it.Node())
				}
			}
		case unstable.ArrayTable:
			at = b.root
			for it := e.Key(); it.Next(); {
				if k := it.Node(); it.IsLast() {
					list := at.fields[string(k.Data)]
					if list == nil || list.kind != unstable.Array {
						list = at.addField(string(k.Data), unstable.Array, b.line(k))
					}
					at = list.addItem(unstable.Table, b.line(k))
				} else {
					at = b.descend(at, k)
				}
			}
		case unstable.KeyValue:
			b.assign(at, e)
		}
	}
	return b
}

// line of a node that has a range: keys, scalars and inline tables; 0 for a list, whose range the parser leaves empty.
func (b *treeBuilder) line(n *unstable.Node) int {
	if n.Raw.Length == 0 {
		return 0
	}
	return 1 + sort.SearchInts(b.newlines, int(n.Raw.Offset))
}

// descend steps into a table, the last one where there is a list of them.
func (b *treeBuilder) descend(n *node, key *unstable.Node) *node {
	c := n.fields[string(key.Data)]
	switch {
	case c != nil && c.kind == unstable.Table:
		return c
	case c != nil && c.kind == unstable.Array && len(c.items) > 0 && c.items[len(c.items)-1].kind == unstable.Table:
		return c.items[len(c.items)-1]
	}
	return n.addField(string(key.Data), unstable.Table, b.line(key))
}

func (b *treeBuilder) assign(n *node, keyValue *unstable.Node) {
	for it := keyValue.Key(); it.Next(); {
		k := it.Node()
		if !it.IsLast() {
			n = b.descend(n, k)
			continue
		}
		before := n.fields[string(k.Data)]
		c := n.addField(string(k.Data), keyValue.Value().Kind, b.line(k))
		if before != nil && b.repeated == nil {
			b.repeated = c
		}
		b.fill(c, keyValue.Value())
	}
}

func (b *treeBuilder) fill(c *node, value *unstable.Node) {
	switch value.Kind {
	case unstable.InlineTable:
		c.kind = unstable.Table
		for it := value.Children(); it.Next(); {
			b.assign(c, it.Node())
		}
	case unstable.Array:
		for it := value.Children(); it.Next(); {
			line := b.line(it.Node())
			if line == 0 {
				line = c.line
			}
			b.fill(c.addItem(it.Node().Kind, line), it.Node())
		}
	default:
		c.text = string(value.Data)
	}
}
