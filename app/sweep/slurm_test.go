package sweep

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func TestRanges(t *testing.T) {
	for _, c := range []struct {
		chunks []int
		want   string
	}{{[]int{0}, "0"}, {[]int{0, 1, 2, 5}, "0-2,5"}, {[]int{1, 3, 4}, "1,3-4"}} {
		if got := ranges(c.chunks); got != c.want {
			t.Errorf("%v: %s, want %s", c.chunks, got, c.want)
		}
	}
}

// Submitting through stand-ins for sbatch and squeue that keep what they are
// given; the soak run does it on a real one-node Slurm.
func TestSubmit(t *testing.T) {
	bin, dir := t.TempDir(), filepath.Join(t.TempDir(), "it's a sweep")
	script := func(name, text string) {
		if err := os.WriteFile(filepath.Join(bin, name), []byte("#!/bin/sh\n"+text), 0o777); err != nil {
			t.Fatal(err)
		}
	}
	script("sbatch", `echo "$@" >>"`+bin+`/asked"; wc -l <"`+bin+`/asked" | tr -d ' '`)
	script("squeue", `printf '1 3 RUNNING\n2 N/A PENDING\n77 0 RUNNING\n'`)
	t.Setenv("PATH", bin+string(os.PathListSeparator)+os.Getenv("PATH"))

	s := Slurm{Program: "/opt/annulet-batch", Account: "astro", Memory: "2G", Cores: 4, AtOnce: 5, Chunks: 6}
	sub, err := s.Submit(t.Context(), dir, []int{1, 2, 3, 5})
	if err != nil || sub.Job != "1" || sub.Merge != "2" {
		t.Fatalf("%+v, %v", sub, err)
	}
	asked, err := os.ReadFile(filepath.Join(bin, "asked"))
	if err != nil || !strings.Contains(string(asked), "--dependency=afterany:1 ") {
		t.Errorf("asked sbatch %s, %v", asked, err)
	}
	text, err := os.ReadFile(filepath.Join(dir, slurmFolder, "array.sh"))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		"#SBATCH --array=1-3,5%5\n", "#SBATCH --mem=2G\n", "#SBATCH --cpus-per-task=4\n", "#SBATCH --account=astro\n",
		`'/opt/annulet-batch' sweep resume '`, `it'\''s a sweep' --chunk "$SLURM_ARRAY_TASK_ID/6" --workers "${SLURM_CPUS_PER_TASK:-1}"`,
	} {
		if !strings.Contains(string(text), want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
	if strings.Contains(string(text), "--time") || strings.Contains(string(text), "--partition") {
		t.Errorf("asks for what was left to the site:\n%s", text)
	}
	tasks, err := Queue(t.Context(), dir)
	if want := []Task{{"1", 3, 6, "RUNNING"}, {"2", -1, 0, "PENDING"}}; err != nil || !slices.Equal(tasks, want) {
		t.Errorf("queue %v, %v", tasks, err)
	}
	if _, err := s.Submit(t.Context(), dir, []int{5}); err != nil {
		t.Fatal(err)
	}
	if all, err := Submissions(dir); err != nil || len(all) != 2 || all[1].Job != "3" {
		t.Errorf("submissions %v, %v", all, err)
	}
}

func TestUnfinished(t *testing.T) {
	records := make([]Record, 10)
	for k := range records {
		records[k].State = Done
	}
	records[0].State, records[4].State, records[9].State = Running, Failed, Waiting
	if got := (Slurm{Chunks: 5}).Unfinished(records); !slices.Equal(got, []int{2, 4}) {
		t.Errorf("chunks %v, want 2 and 4", got)
	}
}
