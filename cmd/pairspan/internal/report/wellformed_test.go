package report

import (
	"fmt"
	"regexp"
	"strings"
	"testing"
)

// voids are the elements of HTML that have no end tag.
var voids = map[string]bool{"meta": true, "br": true, "link": true, "img": true, "input": true, "hr": true}

var (
	tagForm  = regexp.MustCompile(`^<(/?)([a-z][a-z0-9]*)((?:\s+[a-zA-Z][a-zA-Z0-9-]*(?:="[^"<>]*")?)*)\s*(/?)>`)
	attrForm = regexp.MustCompile(`\s+([a-zA-Z][a-zA-Z0-9-]*)(?:="[^"]*")?`)
)

// wellFormed walks a page and returns the first place where its elements do
// not nest, an attribute stands twice, an id stands twice or text holds a bare <.
func wellFormed(page string) error {
	var open []string
	ids := map[string]bool{}
	rest := strings.TrimPrefix(page, "<!doctype html>")
	for {
		i := strings.IndexByte(rest, '<')
		if i < 0 {
			break
		}
		rest = rest[i:]
		m := tagForm.FindStringSubmatch(rest)
		if m == nil {
			return fmt.Errorf("no tag: %.80q", rest)
		}
		rest = rest[len(m[0]):]
		name, closed := m[2], m[4] != ""
		if m[1] != "" {
			if len(open) == 0 || open[len(open)-1] != name {
				return fmt.Errorf("</%s> inside %v", name, open)
			}
			open = open[:len(open)-1]
			continue
		}
		seen := map[string]bool{}
		for _, a := range attrForm.FindAllStringSubmatch(m[3], -1) {
			if seen[a[1]] {
				return fmt.Errorf("%s stands twice in %q", a[1], m[0])
			}
			seen[a[1]] = true
			if a[1] == "id" && ids[a[0]] {
				return fmt.Errorf("two elements have %s", a[0])
			}
			ids[a[0]] = a[1] == "id"
		}
		if closed || voids[name] {
			continue
		}
		if name == "script" || name == "style" || name == "title" {
			end := strings.Index(rest, "</"+name+">")
			if end < 0 {
				return fmt.Errorf("%s does not end", name)
			}
			rest = rest[end+len("</"+name+">"):]
			continue
		}
		open = append(open, name)
	}
	if len(open) > 0 {
		return fmt.Errorf("%v stay open", open)
	}
	return nil
}

// The walk must find what it is there to find.
func TestWellFormedFindsFaults(t *testing.T) {
	for _, bad := range []string{
		"<p>", "<p></div>", "<b><i></b></i>", `<p class="a" class="b"></p>`, `<p id="a"></p><p id="a"></p>`,
		"<p>a < b</p>", "<script>", `<p class=a></p>`, `<p class="a<b"></p>`,
	} {
		if wellFormed(bad) == nil {
			t.Errorf("%s passes", bad)
		}
	}
	if err := wellFormed(`<!doctype html><p id="a" hidden>x<br>&lt;</p><script>a<b</script><path d="M0"/>`); err != nil {
		t.Error(err)
	}
}
