# For those who have make. Everything goes through .ci/setup or plain go, so
# that nothing here is needed to build or test.
GO = go
TAGS = migrated_fynedo

.PHONY: build run test bench fuzz shots clean

build: ## bin/annulet (desk and verbs) and bin/annulet-batch (verbs, static)
	CGO_ENABLED=0 $(GO) build -trimpath -buildvcs=false -o bin/annulet-batch ./app/annulet-batch
	$(GO) build -trimpath -buildvcs=false -tags $(TAGS) -o bin/annulet ./app/annulet

run: ## install what is missing, build, open the desk
	sh .ci/setup run

test: ## install what is missing, all tests
	sh .ci/setup test

bench: ## benchmarks of the pure packages
	CGO_ENABLED=0 $(GO) test -run '^$$' -bench . -benchmem ./geodesic/... ./raytrace/... ./scenes/...

fuzz: ## half a minute of every fuzz target
	@for d in $$(grep -rl --include='*_test.go' '^func Fuzz' . | xargs -n1 dirname | sort -u); do \
	  for f in $$(grep -ho '^func Fuzz[A-Za-z0-9_]*' $$d/*_test.go | cut -c6-); do \
	    echo "$$d $$f"; $(GO) test -run '^$$' -fuzz "^$$f\$$" -fuzztime 30s $$d || exit 1; \
	  done; done

shots: build ## the README's picture
	mkdir -p assets/readme
	bin/annulet-batch render @first-light -o assets/readme/first-light.png

clean:
	rm -rf bin out testdata/failed
