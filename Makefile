# pairspan: build, try, test. `make` alone lists the targets.

GO       ?= go
FUZZTIME ?= 20000x
BENCH    ?= .
DEMO     ?= demo-report

BIN     := .build/pairspan
ASSETS  := cmd/pairspan/internal/report/assets
LIBRARY := $(ASSETS)/echarts.min.js
AXE     := .npm/node_modules/axe-core/axe.min.js
SOURCES := cmd link keyrate sources scenarios
TOOL    := $(GO) tool -modfile=.tools/go.mod

# A clone that belongs to another user has no version that go may read.
export GOFLAGS := $(strip $(GOFLAGS) -buildvcs=false)

# Named here, the browser is part of what go's test cache looks at.
CHROMIUM ?= $(shell command -v chromium || command -v chromium-browser || command -v google-chrome)
export CHROMIUM

.DEFAULT_GOAL := help
.PHONY: help build demo test lint bench golden clean charts fuzz race pictures want-charts not-run

help: ## this list
	@awk -F ':.*## ' '/^[a-z]+:.*## / { printf "  make %-8s %s\n", $$1, $$2 }' $(MAKEFILE_LIST)

build: want-charts ## the program, in .build/pairspan
	$(GO) build -o $(BIN) ./cmd/pairspan

demo: build ## plan the built-in scenario and write its report
	$(BIN) demo --out $(DEMO)
	@echo "The report is $(DEMO)/report.html"

test: want-charts ## all tests; says how many browser tests could not run
	@status=0; $(GO) test ./... || status=$$?; \
	$(MAKE) --no-print-directory not-run; exit $$status

race: ## the short tests under the race detector (needs gcc)
	CGO_ENABLED=1 $(GO) test -race -short ./...

# Counted in inputs: a limit in seconds that runs out while an input is tried
# can end a clean run as failed.
fuzz: ## every fuzz target for FUZZTIME (20000x: so many inputs; or 60s)
	@set -e; for pkg in $$($(GO) list ./...); do \
		names=$$($(GO) test -list '^Fuzz' "$$pkg"); \
		for name in $$(echo "$$names" | grep '^Fuzz' || true); do \
			echo "$$pkg $$name"; \
			$(GO) test -run '^$$' -fuzz "^$$name\$$" -fuzztime $(FUZZTIME) "$$pkg"; \
		done; \
	done

bench: ## benchmarks with their allocations; BENCH chooses some
	$(GO) test -run '^$$' -bench '$(BENCH)' -benchmem ./...

lint: ## gofmt, gofumpt, go vet, staticcheck
	@unformatted=$$(gofmt -l $(SOURCES)); \
	if [ -n "$$unformatted" ]; then echo "gofmt -w these: $$unformatted"; exit 1; fi
	@unformatted=$$($(TOOL) gofumpt -l $(SOURCES)) || exit 1; \
	if [ -n "$$unformatted" ]; then echo "gofumpt -w these: $$unformatted"; exit 1; fi
	$(GO) vet ./...
	$(TOOL) staticcheck ./...

golden: ## pin the golden files to the present output; say why in the commit
	@packages=$$(grep -rl --include='*_test.go' 'flag.Bool("update"' $(SOURCES) | xargs -r -n1 dirname | sort -u | sed 's,^,./,'); \
	if [ -z "$$packages" ]; then echo "no package has golden files"; exit 0; fi; \
	$(GO) test $$packages -update

pictures: want-charts ## the README's pictures, from the demo's report (needs Chromium)
	mkdir -p testdata/pictures
	CI=true $(GO) test -count=1 -run '^TestPictures$$' ./cmd/pairspan/internal/report -pictures '$(CURDIR)/testdata/pictures'

charts: $(LIBRARY) $(AXE) ## fetch the chart library of the report, and axe-core for its tests (needs npm)

$(LIBRARY) $(AXE) &: .npm/package-lock.json .npm/package.json
	@command -v npm >/dev/null || { echo "charts need npm: apt-get install npm"; exit 1; }
	cd .npm && npm ci --no-progress
	cp .npm/node_modules/echarts/LICENSE             $(ASSETS)/echarts.LICENSE
	cp .npm/node_modules/echarts/NOTICE              $(ASSETS)/echarts.NOTICE
	cp .npm/node_modules/echarts/licenses/LICENSE-d3 $(ASSETS)/echarts.LICENSE-d3
	cp .npm/node_modules/zrender/LICENSE             $(ASSETS)/zrender.LICENSE
	cp .npm/node_modules/tslib/LICENSE.txt           $(ASSETS)/tslib.LICENSE
	cp .npm/node_modules/echarts/dist/echarts.min.js $(LIBRARY)
	touch $(AXE)

# Charts where they can be had; without npm or network the rest goes on.
want-charts:
	@if $(MAKE) --no-print-directory -q $(LIBRARY) $(AXE) 2>/dev/null; then :; \
	elif ! command -v npm >/dev/null && [ "$$CI" != true ]; then \
		[ -f $(LIBRARY) ] || echo "No charts in the report, tables only. For charts: apt-get install npm, then make charts"; \
	elif ! $(MAKE) --no-print-directory charts; then \
		if [ "$$CI" = true ]; then exit 1; fi; \
		echo "No charts in the report, tables only. For charts, when npm can reach its registry: make charts"; \
	fi

# Counts the browser tests that were skipped, by asking them again.
not-run:
	@have_browser=false; command -v "$${CHROMIUM:-no-browser}" >/dev/null && have_browser=true; \
	have_charts=false; [ -f $(LIBRARY) ] && [ -f $(AXE) ] && have_charts=true; \
	if $$have_browser && $$have_charts; then exit 0; fi; \
	packages=$$(grep -rl --include='*_test.go' 'func TestBrowser' $(SOURCES) | xargs -r -n1 dirname | sort -u | sed 's,^,./,'); \
	[ -n "$$packages" ] || exit 0; \
	n=$$($(GO) test -v -run '^TestBrowser' $$packages | grep -c '^--- SKIP: TestBrowser'); \
	[ "$$n" -gt 0 ] || exit 0; \
	want=""; $$have_browser || want="apt-get install chromium"; \
	$$have_charts || { command -v npm >/dev/null && more="make charts" || more="apt-get install npm"; want="$${want:+$$want; }$$more"; }; \
	echo "NOT RUN: $$n browser tests. For them: $$want"

clean: ## remove what the targets above have made
	rm -rf .build $(DEMO) .npm/node_modules
	find $(ASSETS) -type f ! -name README.md -delete
