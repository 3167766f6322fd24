# For those who have make. Everything goes through .ci/setup or plain go, so
# that nothing here is needed to build or test.
GO = go
TAGS = migrated_fynedo

PEERS = ../shared/peers
SLURM = ../shared/slurm
FUZZTIME = 30s
SOAK = env CGO_ENABLED=0 $(GO) test -tags ci,$(TAGS) -count=1 -timeout 2h -v

.PHONY: build deb fast run test bench peers large fuzz soak cluster shots clean

build: ## bin/annulet (desk and verbs) and bin/annulet-batch (verbs, static)
	CGO_ENABLED=0 $(GO) build -trimpath -buildvcs=false -o bin/annulet-batch ./app/annulet-batch
	$(GO) build -trimpath -buildvcs=false -tags $(TAGS) -o bin/annulet ./app/annulet

deb: build ## bin/annulet_VERSION_ARCH.deb: programs, icon, menu entry, scene files' type
	sh assets/linux/deb.sh bin

run: ## install what is missing, build, open the desk
	sh .ci/setup run

test: ## install what is missing, all tests
	sh .ci/setup test

fast: ## the same programs for processors from 2015 on (AVX2, FMA); 1 to 3 % faster
	CGO_ENABLED=0 GOAMD64=v3 $(GO) build -trimpath -buildvcs=false -o bin/annulet-batch ./app/annulet-batch
	GOAMD64=v3 $(GO) build -trimpath -buildvcs=false -tags $(TAGS) -o bin/annulet ./app/annulet

peers: ## single paths against GSL and Boost odeint at equal error: PEERS=folder of the peers' sources
	mkdir -p bin/peers
	gcc -O3 -march=native -o bin/peers/gsl $(PEERS)/gsl_bench.c -lgsl -lgslcblas -lm
	g++ -O3 -march=native -std=c++17 -o bin/peers/odeint $(PEERS)/odeint_bench.cpp
	cp $(PEERS)/ref.bin bin/peers/
	CGO_ENABLED=0 GOAMD64=v3 ANNULET_PEERS=$(CURDIR)/bin/peers $(GO) test -run '^$$' -bench Peers -benchtime 5x ./geodesic

large: build ## nanoseconds a pixel from 1 to 64 megapixels; time and memory of 16384 x 16384
	$(GO) test -run '^$$' -bench Linear ./raytrace
	mkdir -p out
	/usr/bin/time -v bin/annulet-batch render @first-light --set 'field.pixels=[16384, 16384]' -o out/large.png

bench: ## benchmarks of the pure packages
	CGO_ENABLED=0 $(GO) test -run '^$$' -bench . -benchmem ./geodesic/... ./raytrace/... ./scenes/...

soak: ## the long forms: 50 kills, 5000 random scenes, memory, minutes of fuzzing, a cluster
	ANNULET_KILLS=50 $(SOAK) -run Killed ./app/sweep
	ANNULET_SOAK=1 $(SOAK) -run SweepMemory ./app/verbs
	ANNULET_SEED=$(or $(SEED),2) ANNULET_SCENES=5000 $(SOAK) -run RandomScenes ./raytrace
	$(MAKE) cluster
	$(MAKE) fuzz FUZZTIME=3m

cluster: ## sweeps on a Slurm of one node, as root: SLURM=folder with up.sh and down.sh, which start and stop it
	@S=$$(mktemp -d); export S; bash $(SLURM)/up.sh && \
	  { SLURM_CONF=$$S/slurm.conf ANNULET_SLURM=1 $(SOAK) -run TestSlurm ./app/verbs; rc=$$?; bash $(SLURM)/down.sh; exit $$rc; }

fuzz: ## half a minute of every fuzz target, or FUZZTIME
	@for d in $$(grep -rl --include='*_test.go' '^func Fuzz' . | xargs -n1 dirname | sort -u); do \
	  for f in $$(grep -ho '^func Fuzz[A-Za-z0-9_]*' $$d/*_test.go | cut -c6-); do \
	    echo "$$d $$f"; $(GO) test -run '^$$' -fuzz "^$$f\$$" -fuzztime $(FUZZTIME) -fuzzminimizetime 50x $$d || exit 1; \
	  done; done

shots: build ## the README's picture
	mkdir -p assets/readme
	bin/annulet-batch figure @first-light --set 'figure.panels=["image", "blurred", "line", "visibility"]' \
	  --set 'figure.draw=["ring", "scale"]' --set figure.columns=2 --set field.width=24M \
	  --set figure.resolution=150 -o assets/readme/first-light.png

clean:
	rm -rf bin out testdata/failed
