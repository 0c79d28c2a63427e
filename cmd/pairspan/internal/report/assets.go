package report

import (
	"embed"
	"strings"
	"sync"
)

// assetFiles holds the chart library where `make charts` has put it there, and
// a README in any case, so that the program compiles without the library.
//
//go:embed assets
var assetFiles embed.FS

// notice is a licence or notice text that must go with the library.
type notice struct{ Name, Text string }

// library is the chart library; Script is empty where it is missing.
type library struct {
	Script  string
	Notices []notice
}

// noticeFiles lists the texts in the order in which a page shows them.
var noticeFiles = []string{"echarts.NOTICE", "echarts.LICENSE", "echarts.LICENSE-d3", "zrender.LICENSE", "tslib.LICENSE"}

// charting returns the library that was compiled in. A script without every
// licence text counts as missing: the page may not be passed on without them.
var charting = sync.OnceValue(func() library {
	script, err := assetFiles.ReadFile("assets/echarts.min.js")
	if err != nil || strings.Contains(strings.ToLower(string(script)), "</script") {
		return library{}
	}
	lib := library{Script: string(script)}
	for _, name := range noticeFiles {
		text, err := assetFiles.ReadFile("assets/" + name)
		if err != nil {
			return library{}
		}
		lib.Notices = append(lib.Notices, notice{Name: name, Text: strings.TrimSpace(string(text))})
	}
	return lib
})
