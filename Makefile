# Quietbus. On a fresh Debian or Ubuntu machine Go and make are enough:
#
#   make run     install what is missing and open the demo study
#   make test    install what is missing and run every check
#
#   make build   ./quietbus
#   make bench   the speed figures of the README
#   make shots   pictures of the window, in ./shots

SHELL := /bin/bash
GO ?= go
# No version stamp from a repository: it needs a git that may not be there.
BUILD := -buildvcs=false
DEMO := testdata/demo.study.json

.PHONY: run test build bench shots go-here packages test-packages first-build fmt vet unit race window

run: go-here
ifeq ($(DISPLAY),)
	@echo "quietbus: there is no display here, so the demo's handout is written instead of opening the window"
	@$(GO) run $(BUILD) -tags headless ./app handout $(DEMO) -o demo-handout; \
	  rc=$$?; [ $$rc -le 1 ] || exit $$rc; \
	  echo "quietbus: the demo's handout is in $(CURDIR)/demo-handout (start with handout.pdf)"
else
	@$(MAKE) --no-print-directory build
	./quietbus $(DEMO)
endif

build: packages first-build
	$(GO) build $(BUILD) -o quietbus ./app

test: test-packages fmt first-build vet unit race window
	@echo "quietbus: all checks passed"

go-here:
	@command -v $(GO) >/dev/null || { echo "quietbus: Go is missing; install Go 1.26 or newer (https://go.dev/dl) and make, then start again" >&2; exit 1; }

packages: go-here
	@.ci/packages run

test-packages: go-here
	@.ci/packages test

# The toolkit's OpenGL package is large C code; everything else is quick.
first-build:
	@if [ "$$($(GO) list $(BUILD) -f '{{.Stale}}' fyne.io/fyne/v2/app 2>/dev/null)" != false ]; then \
	  echo "quietbus: the first build of the graphics library takes some minutes (over three on two cores); later ones are quick"; fi

fmt:
	@bad=$$(gofmt -l app assets study widgets testdata); [ -z "$$bad" ] || { echo "quietbus: gofmt these files:" >&2; echo "$$bad" >&2; exit 1; }

vet:
	$(GO) vet $(BUILD) ./...

unit:
	$(GO) test $(BUILD) ./...

# The parts that work in several goroutines, without the graphics driver.
race:
	$(GO) test $(BUILD) -race -short -tags headless -run 'Race|Evaluator|Project' ./app

window:
	QUIETBUS_WINDOW_TEST=1 LANG=C.UTF-8 $(GO) test $(BUILD) -count=1 -run TrueWindow -v ./app

bench: go-here
	$(GO) test $(BUILD) -tags headless -run '^$$' -bench . -benchmem ./study/... ./widgets/... ./app | tee bench.txt

shots: test-packages build
	.ci/shots
