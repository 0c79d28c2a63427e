package report

import (
	"bytes"
	"cmp"
	"context"
	"flag"
	"image"
	"image/color"
	"image/draw"
	"image/png"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"sync"
	"testing"

	cdppage "github.com/chromedp/cdproto/page"
	"github.com/chromedp/chromedp"

	"pairspan/scenarios"
	"pairspan/scenarios/plan"
)

var picturesTo = flag.String("pictures", "", "write the README's pictures into this folder")

var demo struct {
	once sync.Once
	plan *plan.Plan
	err  error
}

// demoPlan is the plan of the scenario that is built in, made once; no test
// changes it.
func demoPlan(t testing.TB) *plan.Plan {
	t.Helper()
	demo.once.Do(func() {
		s, err := scenarios.LoadFS(scenarios.Examples, "demo.yaml")
		if err != nil {
			demo.err = err
			return
		}
		demo.plan, demo.err = plan.New(context.Background(), s, "0.1.0", nil)
	})
	if demo.err != nil {
		t.Fatal(demo.err)
	}
	return demo.plan
}

// pictures are parts of the demo's report as the README shows them.
var pictures = []struct{ file, from, to string }{
	{"first-screen.png", ".answer", ".answer"},
	{"key-rate.png", "#figure-rate", "#figure-rate figcaption"},
}

// mostPictureBytes keeps the pictures small.
const mostPictureBytes = 100_000

// TestPictures makes the README's pictures: make pictures. They are
// looked at by people and never compared.
func TestPictures(t *testing.T) {
	if *picturesTo == "" {
		t.Skip("-pictures was not given: make pictures")
	}
	lib := needCharts(t)
	b := open(t, demoPlan(t), lib, view{width: 1160, height: 900})
	for _, p := range pictures {
		ask[bool](b, `document.querySelectorAll(".save, details").forEach(e => { e.style.display = "none" }), true`)
		box := ask[[]float64](b, `(() => {
			const a = document.querySelector("`+p.from+`").getBoundingClientRect(), z = document.querySelector("`+p.to+`").getBoundingClientRect();
			return [a.left + scrollX - 16, a.top + scrollY - 8, Math.max(a.width, z.width) + 32, z.bottom - a.top + 16];
		})()`)
		shot, err := chromedp.Call(b.ctx, cdppage.CaptureScreenshot, cdppage.CaptureScreenshotParams{
			Format: cdppage.CaptureScreenshotFormatPng, CaptureBeyondViewport: new(true),
			Clip: &cdppage.Viewport{X: max(0, box[0]), Y: max(0, box[1]), Width: box[2], Height: box[3], Scale: 1},
		})
		if err != nil {
			t.Fatal(err)
		}
		small := fewColours(t, shot.Data)
		if len(small) > mostPictureBytes {
			t.Errorf("%s is %d bytes, want %d at most", p.file, len(small), mostPictureBytes)
		}
		if err := os.WriteFile(filepath.Join(*picturesTo, p.file), small, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	b.quiet()
}

// fewColours writes a picture with its 64 commonest colours, others as the
// nearest of them: type and lines need no more.
func fewColours(t *testing.T, shot []byte) []byte {
	t.Helper()
	full, err := png.Decode(bytes.NewReader(shot))
	if err != nil {
		t.Fatal(err)
	}
	box := full.Bounds()
	count := map[color.RGBA]int{}
	for y := box.Min.Y; y < box.Max.Y; y++ {
		for x := box.Min.X; x < box.Max.X; x++ {
			count[color.RGBAModel.Convert(full.At(x, y)).(color.RGBA)]++
		}
	}
	commonest := slices.SortedFunc(maps.Keys(count), func(a, b color.RGBA) int {
		return cmp.Or(cmp.Compare(count[b], count[a]), bytes.Compare([]byte{a.R, a.G, a.B}, []byte{b.R, b.G, b.B}))
	})
	var palette color.Palette
	for _, c := range commonest[:min(64, len(commonest))] {
		palette = append(palette, c)
	}
	small := image.NewPaletted(box, palette)
	draw.Draw(small, box, full, box.Min, draw.Src)
	var out bytes.Buffer
	if err := (&png.Encoder{CompressionLevel: png.BestCompression}).Encode(&out, small); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}
