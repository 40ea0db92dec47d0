# Everything a contributor runs. `make` alone lists it.

GO      ?= go
SITE    := site/dist
WASM    := $(SITE)/engine/escapement.wasm
PRESS   := $(SITE)/engine/press/build
EDGE    := wasm/press/edge/build
PORT    ?= 8017
VERSION := $(shell git describe --tags --always 2>/dev/null)
# The print service runs in the page's worker and at the edge through this library;
# its version is the one in go.mod.
WORKERS := $(GO) run github.com/syumai/workers/cmd/workers-assets-gen -mode=go
# Pinned; the tool runs from the module cache and leaves go.mod alone.
STATICCHECK := honnef.co/go/tools/cmd/staticcheck@v0.7.0
PARTS   := index.html icon.svg icons manifest.webmanifest main.js offline.js base css engine model views

.PHONY: help
help: ## list what can be run
	@awk -F ':.*## ' '/^[a-z-]+:.*## / { printf "make %-8s %s\n", $$1, $$2 }' $(MAKEFILE_LIST)

.PHONY: run
run: site ## build the site and serve it on this machine
	@echo "escapement is at the address below; Ctrl C ends it."
	@$(GO) run ./engine/cmd/escapement serve -port $(PORT)

.PHONY: site
site: need-go ## build site/dist, ready for any static host
	@rm -rf $(SITE) && mkdir -p $(SITE)
	@cd site && cp -R $(PARTS) dist/ && sed 's/name="version" content=""/name="version" content="$(VERSION)"/' index.html >dist/index.html
	@cp "$$($(GO) env GOROOT)/lib/wasm/wasm_exec.js" $(SITE)/engine/
	@GOOS=js GOARCH=wasm $(GO) build -trimpath -ldflags="-s -w" -o $(WASM) ./wasm/live
	@$(WORKERS) -runtime=browser -o $(PRESS)
	@cd $(PRESS) && for m in worker runtime; do sed 's/\.mjs"/.js"/' $$m.mjs >$$m.js && rm $$m.mjs; done # not every static host knows the type of .mjs
	@GOOS=js GOARCH=wasm $(GO) build -trimpath -ldflags="-s -w" -o $(PRESS)/app.wasm ./wasm/press
	@$(GO) run ./site/stamp $(SITE)
	@for f in $(WASM) $(PRESS)/app.wasm; do printf '%-34s %9d bytes, %8d gzipped\n' $$f "$$(wc -c <$$f)" "$$(gzip -9 -c $$f | wc -c)"; \
		if command -v brotli >/dev/null; then printf '%-34s %26d as brotli\n' "" "$$(brotli -q 9 -c $$f | wc -c)"; fi; done
	@printf '%-34s %9d bytes, %8d gzipped\n' "the rest of the page" \
		"$$(find $(SITE) -type f ! -name '*.wasm' -exec cat {} + | wc -c)" \
		"$$(find $(SITE) -type f ! -name '*.wasm' -exec gzip -9 -c {} \; | wc -c)"

.PHONY: edge
edge: need-go ## build the print service for an edge host, into wasm/press/edge/build
	@$(WORKERS) -runtime=cloudflare -o $(EDGE)
	@GOOS=js GOARCH=wasm $(GO) build -trimpath -ldflags="-s -w" -o $(EDGE)/app.wasm ./wasm/press
	@printf '%-34s %9d bytes, %8d gzipped\n' $(EDGE)/app.wasm "$$(wc -c <$(EDGE)/app.wasm)" "$$(gzip -9 -c $(EDGE)/app.wasm | wc -c)"

.PHONY: test
test: need-go need-browser need-edf lint site ## everything a contributor must pass (installs what it needs)
	@bash .ci/tests

.PHONY: test-edge
test-edge: need-go need-node site edge ## the print service on an edge host against the native handler (installs the host)
	@bash .ci/need edge
	@node --test wasm/press/edge/edge.test.js

.PHONY: lint
lint: need-go need-node ## format, vet, staticcheck, types of the page
	@bad="$$(gofmt -l $$(git ls-files -co --exclude-standard '*.go'))"; if [ -n "$$bad" ]; then echo "gofmt would change:"; echo "$$bad"; exit 1; fi
	$(GO) vet ./...
	GOOS=js GOARCH=wasm $(GO) vet ./wasm/...
	$(GO) run $(STATICCHECK) ./...
	cd site/test && npx tsc -p .

.PHONY: golden
golden: need-go ## rewrite the goldens and show what changed
	@for dir in $$(grep -rl --include='*_test.go' 'flag.Bool("update"' . | xargs -n1 dirname | sort -u); do \
		$(GO) test $$dir -update || exit 1; done
	@git --no-pager diff --stat -- '*testdata*'
	@git --no-pager diff -- '*testdata*.txt' '*testdata*.json' '*testdata*.svg'

.PHONY: bench
bench: need-go need-browser site ## benchmarks: work per second and ratios taken in one run
	$(GO) test -run '^$$' -bench . ./...
	node site/test/frame.bench.js
	node site/test/map.bench.js

.PHONY: need-go need-node need-browser need-edf
need-go:
	@command -v $(GO) >/dev/null || { echo "Go is missing: install Go 1.26 or later from your system or go.dev, then run this again."; exit 1; }

need-node:
	@bash .ci/need node

need-browser: need-node
	@bash .ci/need browser
	@bash .ci/need ruler

need-edf:
	@bash .ci/need edf
