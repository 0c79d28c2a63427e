package plan

import (
	"regexp"
	"slices"
	"strconv"
	"strings"
	"sync"

	"pairspan/scenarios"
)

// What Withhold leaves out, in words.
var withheld = []string{
	"the title", "the names of compared cases", "the origins of figures", "prices and the budget",
	"the names and the text of the input files",
}

// Withhold returns the plan as it may leave the house: without the words that
// can name a place, without money and without the files it was made from. The
// hashes of the files stay, so that it can be told later which they were;
// so do the names of detectors and every figure of the link. The plan that is
// given is not changed.
func (p *Plan) Withhold() *Plan {
	out := *p
	out.Title = "Title withheld"
	out.Withheld = slices.Clone(withheld)
	out.Origins = []Origin{}
	out.Buying = nil
	out.Inputs = hashesOnly(p.Inputs)
	out.Entries = publicEntries(p.Entries)
	out.DefaultsUsed = slices.DeleteFunc(slices.Clone(p.DefaultsUsed), func(d Default) bool { return isPrice(d.Entry) })
	names := map[string]string{}
	out.Cases = namelessCases(p.Cases, names)
	out.Warnings = renamed(p.Warnings, names)
	if p.Needs != nil {
		needs := *p.Needs
		needs.Budget = nil
		out.Needs = &needs
	}
	if p.Against != nil {
		against := *p.Against
		against.Cases = slices.Clone(against.Cases)
		for i := range against.Cases {
			if name, is := names[against.Cases[i].Name]; is {
				against.Cases[i].Name = name
			}
		}
		out.Against = &against
	}
	return &out
}

// renamed puts the new names of compared cases into warnings of them.
func renamed(warnings []Warning, names map[string]string) []Warning {
	out := slices.Clone(warnings)
	for i := range out {
		for old, name := range names {
			if rest, is := strings.CutPrefix(out[i].Sentence, ofCase(old)); is {
				out[i].Sentence = ofCase(name) + rest
				break
			}
		}
	}
	return out
}

func hashesOnly(inputs []Input) []Input {
	out := make([]Input, len(inputs))
	for i, in := range inputs {
		out[i] = Input{Name: "file " + strconv.Itoa(i+1), SHA256: in.SHA256}
	}
	return out
}

func publicEntries(entries []Entry) []Entry {
	out := []Entry{}
	for _, e := range entries {
		if isPrice(e.Entry) {
			continue
		}
		e.Origin, e.Value = nil, publicValue(e.Entry, e.Value)
		out = append(out, e)
	}
	return out
}

const hidden = "withheld"

// publicValue hides money and names of files, alone or inside a group.
func publicValue(entry, value string) string {
	if slices.Contains(private(), entry[strings.LastIndexByte(entry, '.')+1:]) {
		return hidden
	}
	return privateInGroup().ReplaceAllString(value, "${1}"+hidden)
}

// private are the last words of entries that hold money or name a file.
var private = sync.OnceValue(func() []string {
	var words []string
	for _, e := range scenarios.Entries() {
		if isPrice(e.Name) || e.Range == "a file in the scenario's folder" {
			words = append(words, e.Name[strings.LastIndexByte(e.Name, '.')+1:])
		}
	}
	return words
})

// privateInGroup finds them with their values in a group written on one line.
var privateInGroup = sync.OnceValue(func() *regexp.Regexp {
	return regexp.MustCompile(`(\b(?:` + strings.Join(private(), "|") + `): )("(?:[^"\\]|\\.)*"|[^,}\]]+[^,}\] ])`)
})

// namelessCases names each compared case by what it changes, and notes the
// new name of each old one.
func namelessCases(cases []Case, names map[string]string) []Case {
	out := slices.Clone(cases)
	taken := map[string]bool{}
	for i := range out {
		c := &out[i]
		if len(c.Changes) == 0 {
			continue
		}
		c.Changes = slices.Clone(c.Changes)
		for k := range c.Changes {
			c.Changes[k].Value = publicValue(c.Changes[k].Entry, c.Changes[k].Value)
		}
		name := namedByChanges(c.Changes)
		for n := 2; taken[name]; n++ {
			name = namedByChanges(c.Changes) + " (" + strconv.Itoa(n) + ")"
		}
		taken[name] = true
		names[c.Name], c.Name = name, name
	}
	return out
}

// namedByChanges is the name of a case without a name: two detectors by
// theirs, anything else entry by entry.
func namedByChanges(changes []Change) string {
	if len(changes) == 2 && changes[0].Entry == "arms.alice.detector" && changes[1].Entry == "arms.bob.detector" {
		return changes[0].Value + "+" + changes[1].Value
	}
	parts := make([]string, len(changes))
	for i, c := range changes {
		parts[i] = c.Entry + "=" + c.Value
	}
	return strings.Join(parts, ", ")
}
