package plan

import (
	"fmt"
	"strings"
	"testing"
)

// The lines are counted by hand in the text below.
func TestLinesOfKeys(t *testing.T) {
	const source = `# 1
title = "a" # 2
list = [ # 3
  "x", # 4
  { b = 1, # 5
    c = [ # 6
      1, # 7
      [2] ] }, # 8
] # 9

[one.two] # 11
three.four = '''
''' # 13
five = 1 # 14
[[arm]] # 15
name = "p" # 16
[[arm]] # 17
name = "q" # 18
value = { value = 1, u = 2 } # 19
[arm.measured] # 20
"1 k" = 3 # 21
[[arm]] # 22
[[arm]] # 23
"na me" = 1 # 24
[one] # 25
six = 6 # 26
`
	want := map[string]int{
		"title": 2, "list": 3, "list[1]": 4, "list[2]": 5, "list[2].b": 5, "list[2].c": 6, "list[2].c[1]": 7, "list[2].c[2]": 6, "list[2].c[2][1]": 8,
		"one.two": 11, "one.two.three": 12, "one.two.three.four": 12, "one.two.five": 14,
		"arm": 15, "arm[1]": 15, "arm[1].name": 16, "arm[2]": 17, "arm[2].name": 18, "arm[2].value": 19, "arm[2].value.value": 19, "arm[2].value.u": 19,
		"arm[2].measured": 20, "arm[2].measured.1 k": 21, "arm[3]": 22, "arm[4]": 23, "arm[4].na me": 24, "one": 25, "one.six": 26,
	}
	for _, ending := range []string{"\n", "\r\n"} {
		root, wrong := readTOML([]byte(strings.ReplaceAll(source, "\n", ending)))
		if wrong != nil {
			t.Fatal(wrong)
		}
		got := map[string]int{}
		walkTree(root, func(n *node) { got[n.where()] = n.line })
		delete(got, "")
		check(t, fmt.Sprintf("lines with %q", ending), got, want)
	}
}

func walkTree(n *node, visit func(*node)) {
	visit(n)
	for _, key := range n.keys {
		walkTree(n.fields[key], visit)
	}
	for _, item := range n.items {
		walkTree(item, visit)
	}
}

func TestOwner(t *testing.T) {
	root, wrong := readTOML([]byte("[[arm]]\nname = \"box\"\nvalue = { u = 1 }\n[[steps]]\nname = \"A\"\nset = { box = [1] }\n[fit]\ngain = 1\n"))
	if wrong != nil {
		t.Fatal(wrong)
	}
	got := map[string]string{}
	walkTree(root, func(n *node) { got[n.where()] = n.owner() })
	check(t, "owner of arm[1].value.u", got["arm[1].value.u"], `arm "box"`)
	check(t, "owner of steps[1].set.box[1]", got["steps[1].set.box[1]"], `block "A"`)
	check(t, "owner of fit.gain", got["fit.gain"], "")
}
