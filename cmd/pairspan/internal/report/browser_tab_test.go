package report

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"net/url"
	"os"
	"os/exec"
	"path/filepath"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"

	"pairspan/scenarios/plan"
)

// Every test that needs a browser has a name that begins with TestBrowser, so
// that the Makefile can count those that did not run.

// browser is one Chromium for all tests of this package.
var browser struct {
	once sync.Once
	ctx  context.Context
	dir  string
	stop func()
	err  error
}

func TestMain(m *testing.M) {
	code := m.Run()
	if browser.stop != nil {
		browser.stop()
	}
	os.Exit(code)
}

// errNoBrowser names what to install.
var errNoBrowser = errors.New("no Chromium found: apt-get install chromium, or name one in CHROMIUM")

func findBrowser() (string, error) {
	if path := os.Getenv("CHROMIUM"); path != "" {
		found, err := exec.LookPath(path)
		if err != nil {
			return "", fmt.Errorf("%w (CHROMIUM is %s)", errNoBrowser, path)
		}
		return found, nil
	}
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome"} {
		if path, err := exec.LookPath(name); err == nil {
			return path, nil
		}
	}
	return "", errNoBrowser
}

func startBrowser() {
	path, err := findBrowser()
	if err != nil {
		browser.err = err
		return
	}
	dir, err := os.MkdirTemp("", "pairspan-browser-")
	if err != nil {
		browser.err = err
		return
	}
	options := append(chromedp.DefaultExecAllocatorOptions[:],
		chromedp.ExecPath(path), chromedp.UserDataDir(dir), chromedp.NoSandbox, chromedp.DisableGPU,
		chromedp.Flag("disable-quic", true), chromedp.Flag("disable-component-update", true),
		chromedp.Flag("disable-background-networking", true), chromedp.Flag("disable-sync", true))
	allocator, stopAllocator := chromedp.NewExecAllocator(context.Background(), options...)
	ctx, stopBrowser := chromedp.NewContext(allocator)
	browser.dir = dir
	browser.stop = func() {
		stopBrowser()
		stopAllocator()
		os.RemoveAll(dir)
	}
	browser.ctx, browser.err = ctx, chromedp.Do(ctx)
}

// needBrowser skips the test by name where there is no browser, and fails it
// where CI promises one.
func needBrowser(t *testing.T) {
	t.Helper()
	if testing.Short() {
		t.Skip("browser tests are left out of a short run")
	}
	browser.once.Do(startBrowser)
	if browser.err == nil {
		return
	}
	if os.Getenv("CI") == "true" || !errors.Is(browser.err, errNoBrowser) {
		t.Fatal(browser.err)
	}
	t.Skip(browser.err)
}

// needCharts is needBrowser for a page with charts.
func needCharts(t *testing.T) library {
	t.Helper()
	if lib := charting(); lib.Script == "" && !testing.Short() {
		const missing = "no chart library compiled in: make charts (needs npm)"
		if os.Getenv("CI") == "true" {
			t.Fatal(missing)
		}
		t.Skip(missing)
	}
	needBrowser(t)
	return charting()
}

// tab is one open page and everything that it complained of or asked for.
type tab struct {
	t    *testing.T
	ctx  context.Context
	stop func()
	url  string
	mu   sync.Mutex
	said []string // console messages, exceptions and entries of the browser's log
	sent []string // addresses asked for
}

// view is how the page is looked at.
type view struct {
	width, height int64
	dark          bool
}

var desktop = view{width: 1280, height: 720}

// open writes the page of a plan to a file and loads it, for one test.
func open(t *testing.T, p *plan.Plan, lib library, v view) *tab {
	t.Helper()
	b := load(t, browser.ctx, t.TempDir(), p, lib, v)
	t.Cleanup(b.stop)
	return b
}

// pages are those of the sample and of the demo with charts, opened once for
// all tests that leave them as they found them.
var pages = map[string]*tab{}

func sampleTab(t *testing.T) *tab { return sharedTab(t, "sample", samplePlan) }

func demoTab(t *testing.T) *tab {
	return sharedTab(t, "demo", func() *plan.Plan { return demoPlan(t) })
}

// sharedTab returns a page that was opened before, as it was then: on a desk,
// light, with everything folded.
func sharedTab(t *testing.T, name string, of func() *plan.Plan) *tab {
	t.Helper()
	lib := needCharts(t)
	b := pages[name]
	if b == nil {
		dir := filepath.Join(browser.dir, name)
		if err := os.MkdirAll(dir, 0o755); err != nil {
			t.Fatal(err)
		}
		b = load(t, browser.ctx, dir, of(), lib, desktop)
		pages[name] = b
	}
	b.t = t
	b.do(chromedp.EmulateViewport(desktop.width, desktop.height))
	b.colours(false, "")
	ask[bool](b, `document.querySelectorAll("details").forEach(d => { d.open = false }), scrollTo(0, 0), true`)
	b.settle()
	return b
}

func load(t *testing.T, in context.Context, dir string, p *plan.Plan, lib library, v view) *tab {
	t.Helper()
	var page bytes.Buffer
	if err := writePage(&page, p, lib); err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(dir, "report.html")
	if err := os.WriteFile(file, page.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	b := &tab{t: t, url: (&url.URL{Scheme: "file", Path: file}).String()}
	ctx, cancel := chromedp.NewContext(in, chromedp.WithListener(b.listen))
	ctx, cancelTime := context.WithTimeout(ctx, 3*time.Minute)
	b.ctx, b.stop = ctx, func() { cancelTime(); cancel() }
	b.do(chromedp.EmulateViewport(v.width, v.height))
	must(chromedp.Call(ctx, network.Enable, network.EnableParams{}))(t)
	b.colours(v.dark, "")
	b.do(chromedp.Navigate(b.url))
	b.settle()
	return b
}

// colours sets the scheme that the reader prefers, and the medium.
func (b *tab) colours(dark bool, medium string) {
	b.t.Helper()
	scheme := "light"
	if dark {
		scheme = "dark"
	}
	must(chromedp.Call(b.ctx, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
		Media:    medium,
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}},
	}))(b.t)
}

// settle waits two frames: then the charts have been laid out and drawn.
func (b *tab) settle() {
	b.t.Helper()
	ask[bool](b, `new Promise(done => requestAnimationFrame(() => requestAnimationFrame(() => done(true))))`)
}

// must returns a check of a command's error.
func must[R any](_ R, err error) func(*testing.T) {
	return func(t *testing.T) {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
	}
}

func (b *tab) listen(event any) {
	b.mu.Lock()
	defer b.mu.Unlock()
	switch e := event.(type) {
	case *runtime.EventConsoleAPICalled:
		b.said = append(b.said, fmt.Sprintf("console.%s", e.Type))
	case *runtime.EventExceptionThrown:
		b.said = append(b.said, "exception: "+e.ExceptionDetails.Text)
	case *log.EventEntryAdded:
		b.said = append(b.said, string(e.Entry.Level)+": "+e.Entry.Text)
	case *network.EventRequestWillBeSent:
		b.sent = append(b.sent, e.Request.URL)
	}
}

func (b *tab) do(steps ...chromedp.Action[chromedp.Void]) {
	b.t.Helper()
	if err := chromedp.Do(b.ctx, steps...); err != nil {
		b.t.Fatal(err)
	}
}

// ask evaluates an expression in the page.
func ask[T any](b *tab, expression string) T {
	b.t.Helper()
	v, err := chromedp.Run(b.ctx, chromedp.Evaluate[T](expression, chromedp.EvalAwaitPromise))
	if err != nil {
		b.t.Fatalf("%s: %v", expression, err)
	}
	return v
}

// until waits for a condition in the page, ten seconds at most; a busy machine
// draws late.
func (b *tab) until(condition string) {
	b.t.Helper()
	ask[bool](b, `new Promise(done => {
		const start = performance.now();
		const look = () => (`+condition+`) || performance.now() - start > 10000 ? done(true) : setTimeout(look, 30);
		look();
	})`)
}

// quiet checks that the page complained of nothing and asked for nothing but itself.
func (b *tab) quiet() {
	b.t.Helper()
	b.mu.Lock()
	defer b.mu.Unlock()
	if len(b.said) > 0 {
		b.t.Errorf("the page said %q", b.said)
	}
	if len(b.sent) != 1 || b.sent[0] != b.url {
		b.t.Errorf("the page asked for %q, want %q alone", b.sent, b.url)
	}
}
