package scenarios

import (
	"bytes"
	"cmp"
	"errors"
	"fmt"
	"io"

	"gopkg.in/yaml.v3"
)

// Bounds on a file. A scenario has some hundred values; anchors that refer
// to one another could otherwise stand for billions.
const (
	maxFileBytes = 1 << 20
	maxLines     = 20_000
	maxNodes     = 20_000
	maxDepth     = 64
)

type kind int

const (
	scalar kind = iota
	mapping
	list
)

func (k kind) String() string {
	return [...]string{"a single value", "a mapping", "a list"}[k]
}

// place is where something stands in the file, both from 1.
type place struct{ line, column int }

func (p place) compare(q place) int {
	return cmp.Or(cmp.Compare(p.line, q.line), cmp.Compare(p.column, q.column))
}

// node is one value of the file. Aliases and merges are followed already:
// what they bring in has the place of the alias.
type node struct {
	kind    kind
	text    string // of a scalar
	quoted  bool
	at      place
	members []member // of a mapping, in file order
	items   []*node  // of a list
}

// member is one entry of a mapping.
type member struct {
	key   string
	at    place // of the key
	value *node
}

// get returns a mapping's member of that name, nil if it has none.
func (n *node) get(key string) *member {
	for i := range n.members {
		if n.members[i].key == key {
			return &n.members[i]
		}
	}
	return nil
}

// parseTree reads the one YAML document of a file into nodes.
func parseTree(file string, data []byte) (*node, Errors) {
	if n := bytes.Count(data, []byte("\n")) + bytes.Count(data, []byte("\r")); n > 2*maxLines {
		return nil, Errors{{file, 1, 1, "", fmt.Sprintf("the file has more than %d lines", maxLines), "is it the right file?"}}
	}
	decoder := yaml.NewDecoder(bytes.NewReader(data))
	document, err := decode(decoder)
	if errors.Is(err, io.EOF) {
		return nil, Errors{{file, 1, 1, "", "the file is empty", "pairspan new prints a scenario to start from"}}
	}
	if err != nil {
		return nil, Errors{yamlError(file, data, err)}
	}
	second, err := decode(decoder)
	if err == nil {
		return nil, Errors{{
			file, second.Line, second.Column, "", "a second document begins here",
			"a file holds one scenario; compare: holds its variants",
		}}
	}
	if !errors.Is(err, io.EOF) {
		return nil, Errors{yamlError(file, data, err)}
	}
	g := grower{file: file, open: map[*yaml.Node]bool{}}
	root := g.grow(document.Content[0], from{})
	if len(g.errs) > 0 {
		return nil, g.errs
	}
	if root.kind != mapping {
		return nil, Errors{{
			file, root.at.line, root.at.column, "", "the file is " + root.kind.String() + ", not a mapping of entries",
			"it begins with an entry such as title: My link; pairspan new prints an example",
		}}
	}
	return root, nil
}

// decode reads the next document. The library panics on some malformed
// input; that is bad input like any other.
func decode(d *yaml.Decoder) (document *yaml.Node, err error) {
	defer func() {
		if recover() != nil {
			err = errors.New("the text is not YAML")
		}
	}()
	document = new(yaml.Node)
	err = d.Decode(document)
	if err == nil && (document.Kind != yaml.DocumentNode || len(document.Content) == 0) {
		err = io.EOF
	}
	return document, err
}

// grower turns YAML nodes into ours, within bounds.
type grower struct {
	file  string
	count int
	full  bool
	errs  Errors
	open  map[*yaml.Node]bool // what is being grown: an alias to it would never end
}

// from says how a node is reached.
type from struct {
	name  string // dotted name
	at    *place // of the alias that was followed, nil without one
	depth int
}

// place returns where a node stands for people.
func (f from) place(n *yaml.Node) place {
	if f.at != nil {
		return *f.at
	}
	return place{n.Line, n.Column}
}

// in returns how what stands under a key of the node is reached; "" for an
// item of a list.
func (f from) in(key string) from {
	if key != "" {
		f.name = join(f.name, escape(shorten(key)))
	}
	f.depth++
	return f
}

func (g *grower) fail(name string, at place, problem, hint string) {
	if len(g.errs) <= maxErrors {
		g.errs = append(g.errs, Error{g.file, at.line, at.column, name, problem, hint})
	}
}

// grow returns the node of n.
func (g *grower) grow(n *yaml.Node, f from) *node {
	out := &node{at: f.place(n)}
	g.count++
	switch {
	case g.full:
		return out
	case g.count > maxNodes || f.depth > maxDepth:
		g.full = true
		g.fail(f.name, out.at, fmt.Sprintf("more than %d values, or nested deeper than %d", maxNodes, maxDepth),
			"anchors and aliases that refer to one another multiply")
		return out
	case n.Kind == yaml.AliasNode && g.open[n.Alias]:
		g.fail(f.name, out.at, "the alias "+show("*"+n.Value)+" stands inside what it stands for", "write the value out")
		return out
	case n.Kind == yaml.AliasNode:
		return g.grow(n.Alias, from{f.name, &out.at, f.depth + 1})
	case n.Style&yaml.TaggedStyle != 0:
		g.fail(f.name, out.at, "the tag "+show(n.Tag)+" has no meaning here", "write the value without a tag")
		return out
	}
	g.open[n] = true
	defer delete(g.open, n)
	switch n.Kind {
	case yaml.MappingNode:
		out.kind = mapping
		g.fillMapping(out, n, f)
	case yaml.SequenceNode:
		out.kind = list
		for _, item := range n.Content {
			if !g.full {
				out.items = append(out.items, g.grow(item, f.in("")))
			}
		}
	default:
		out.text = n.Value
		out.quoted = n.Style != 0
	}
	return out
}

// fillMapping adds the members of n: its own first, whatever the order, then
// what its merges bring in.
func (g *grower) fillMapping(out *node, n *yaml.Node, f from) {
	own := map[string]place{}
	for i := 0; i+1 < len(n.Content); i += 2 {
		if key := n.Content[i]; !isMerge(key) {
			g.claim(own, key, f)
		}
	}
	taken := map[string]bool{}
	for i := 0; i+1 < len(n.Content) && !g.full; i += 2 {
		switch key, value := n.Content[i], n.Content[i+1]; {
		case isMerge(key):
			g.merge(out, g.grow(value, f.in("")), f, own, taken)
		case key.Kind == yaml.ScalarNode && !taken[key.Value]:
			taken[key.Value] = true
			out.members = append(out.members, member{key.Value, own[key.Value], g.grow(value, f.in(key.Value))})
		}
	}
}

func isMerge(key *yaml.Node) bool {
	return key.Kind == yaml.ScalarNode && key.Value == "<<" && key.Style == 0
}

// claim notes a key of the mapping itself, which must be a word and new.
func (g *grower) claim(own map[string]place, key *yaml.Node, f from) {
	at := f.place(key)
	first, again := own[key.Value]
	switch {
	case key.Kind != yaml.ScalarNode:
		g.fail(f.name, at, "an entry's name is a plain word", "check for a stray ?, * or bracket")
	case key.Style&yaml.TaggedStyle != 0:
		g.fail(f.name, at, "the tag "+show(key.Tag)+" has no meaning here", "write the name without a tag")
	case again && f.at == nil: // one behind an alias is said at its anchor
		g.fail(f.in(key.Value).name, at, fmt.Sprintf("stands here twice, first in line %d", first.line), "keep one of the two")
	case !again:
		own[key.Value] = at
	}
}

// merge adds what `<<` brings in to a mapping, as far as the mapping does
// not have it: a mapping, or a list of them of which the first counts most.
func (g *grower) merge(out, merged *node, f from, own map[string]place, taken map[string]bool) {
	parts := []*node{merged}
	if merged.kind == list {
		parts = merged.items
	}
	for _, part := range parts {
		if part.kind != mapping && !g.full {
			g.fail(f.name, part.at, "<< takes in a mapping, not "+part.kind.String(), "write <<: *name, the name of a mapping's anchor")
		}
		for _, m := range part.members {
			if _, is := own[m.key]; !is && !taken[m.key] {
				taken[m.key] = true
				out.members = append(out.members, m)
			}
		}
	}
}
