# What a contributor types. The README's two commands need no make.

PREFIX ?= /usr/local
BIN    := bin/tidekiln

.PHONY: build test check bench bench-peers pictures install clean

build:            ## the program in bin/
	CGO_ENABLED=0 go build -trimpath -o $(BIN) ./cmd/tidekiln

test:             ## every test that needs Go only
	go test ./...

check:            ## all suites, as the gate runs them
	.ci/run

bench:            ## benchmarks in Go's own format
	go test -run '^$$' -bench . -benchmem ./orbit ./thermal ./evolve ./evolve/ode

bench-peers:      ## this program's integrator against CVODE and SciPy; some ten minutes
	sh testdata/peers/run.sh

pictures: build   ## the README's picture, from a shipped scenario
	$(BIN) evolve volcanic-cycle --out out/pictures/volcanic-cycle --figure testdata/pictures/volcanic-cycle.png --replace

install: build    ## the program and its shell completions
	install -D $(BIN) $(DESTDIR)$(PREFIX)/bin/tidekiln
	install -d $(DESTDIR)$(PREFIX)/share/bash-completion/completions $(DESTDIR)$(PREFIX)/share/zsh/site-functions $(DESTDIR)$(PREFIX)/share/fish/vendor_completions.d
	$(BIN) completion bash > $(DESTDIR)$(PREFIX)/share/bash-completion/completions/tidekiln
	$(BIN) completion zsh > $(DESTDIR)$(PREFIX)/share/zsh/site-functions/_tidekiln
	$(BIN) completion fish > $(DESTDIR)$(PREFIX)/share/fish/vendor_completions.d/tidekiln.fish

clean:
	rm -rf bin out
