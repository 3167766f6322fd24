package sweep

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"annulet/app/files"
)

// Slurm is what a sweep asks of an existing Slurm installation: sbatch and
// squeue, as they are documented by SchedMD. Empty texts leave the choice to
// the site.
type Slurm struct {
	Program   string // absolute path of this program on the cluster's nodes
	Account   string
	Partition string
	Time      string // of a task
	Memory    string // of a task, as --mem takes it; many sites refuse jobs without
	Cores     int    // of a task
	AtOnce    int    // tasks that may run at a time; 0 for no limit
	Chunks    int    // parts that the cases are cut into, one a task
	OnlyBelow string // absolute path that the files of scenes must lie below; "" for anywhere
}

// slurmFolder holds scripts, logs of the tasks, and which jobs were
// submitted.
const slurmFolder = "slurm"

// Submission is an array of tasks that was handed in.
type Submission struct {
	Job    string `json:"job"`
	Merge  string `json:"merge"` // the job that merges when the array has ended
	Chunks int    `json:"chunks"`
	Tasks  []int  `json:"tasks"` // the chunks that this array does
}

// ArrayScript is the job script of the given chunks.
func (s Slurm) ArrayScript(dir string, chunks []int) string {
	var b strings.Builder
	fmt.Fprintf(&b, "#!/bin/sh\n#SBATCH --job-name=annulet-sweep\n#SBATCH --array=%s", ranges(chunks))
	if s.AtOnce > 0 {
		fmt.Fprintf(&b, "%%%d", s.AtOnce)
	}
	fmt.Fprintf(&b, "\n#SBATCH --ntasks=1\n#SBATCH --cpus-per-task=%d\n", max(1, s.Cores))
	s.common(&b, dir, "%A_%a")
	// The step's limits are the task's; nproc would show the whole node.
	fmt.Fprintf(&b, "exec %s sweep resume %s --chunk \"$SLURM_ARRAY_TASK_ID/%d\" --workers \"${SLURM_CPUS_PER_TASK:-1}\"",
		quoted(s.Program), quoted(dir), s.Chunks)
	if s.OnlyBelow != "" {
		b.WriteString(" --only-below " + quoted(s.OnlyBelow))
	}
	b.WriteString("\n")
	return b.String()
}

// MergeScript is the script of the job that follows the array.
func (s Slurm) MergeScript(dir string) string {
	var b strings.Builder
	b.WriteString("#!/bin/sh\n#SBATCH --job-name=annulet-merge\n#SBATCH --ntasks=1\n#SBATCH --cpus-per-task=1\n")
	s.common(&b, dir, "%j")
	fmt.Fprintf(&b, "exec %s sweep merge %s\n", quoted(s.Program), quoted(dir))
	return b.String()
}

func (s Slurm) common(b *strings.Builder, dir, log string) {
	for _, o := range [][2]string{
		{"mem", s.Memory}, {"time", s.Time}, {"account", s.Account}, {"partition", s.Partition},
		{"output", filepath.Join(dir, slurmFolder, log+".log")},
	} {
		if o[1] != "" {
			fmt.Fprintf(b, "#SBATCH --%s=%s\n", o[0], o[1])
		}
	}
}

// quoted makes one word of a text for sh.
func quoted(text string) string { return "'" + strings.ReplaceAll(text, "'", `'\''`) + "'" }

// ranges writes 0,1,2,5 as 0-2,5.
func ranges(chunks []int) string {
	var parts []string
	for k := 0; k < len(chunks); {
		end := k
		for end+1 < len(chunks) && chunks[end+1] == chunks[end]+1 {
			end++
		}
		if end == k {
			parts = append(parts, strconv.Itoa(chunks[k]))
		} else {
			parts = append(parts, fmt.Sprintf("%d-%d", chunks[k], chunks[end]))
		}
		k = end + 1
	}
	return strings.Join(parts, ",")
}

// Unfinished returns the chunks with a case that is neither done nor at work.
func (s Slurm) Unfinished(records []Record) []int {
	var chunks []int
	for k := range s.Chunks {
		from, to := ChunkBounds(len(records), k, s.Chunks)
		if slices.ContainsFunc(records[from:to], func(r Record) bool { return r.State == Waiting || r.State == Failed }) {
			chunks = append(chunks, k)
		}
	}
	return chunks
}

// Submit hands in the chunks, and a merge that follows them however they end.
func (s Slurm) Submit(ctx context.Context, dir string, chunks []int) (Submission, error) {
	sub := Submission{Chunks: s.Chunks, Tasks: chunks}
	if err := os.MkdirAll(filepath.Join(dir, slurmFolder), 0o777); err != nil {
		return sub, err
	}
	earlier, err := Submissions(dir)
	if err != nil {
		return sub, err
	}
	if sub.Job, err = s.sbatch(ctx, dir, "array.sh", s.ArrayScript(dir, chunks)); err != nil {
		return sub, err
	}
	sub.Merge, err = s.sbatch(ctx, dir, "merge.sh", s.MergeScript(dir), "--dependency=afterany:"+sub.Job)
	return sub, errors.Join(err, writeSubmissions(ctx, dir, append(earlier, sub)))
}

func (s Slurm) sbatch(ctx context.Context, dir, name, script string, more ...string) (job string, err error) {
	path := filepath.Join(dir, slurmFolder, name)
	if err := files.Write(ctx, path, 0o777, func(w io.Writer) error {
		_, err := io.WriteString(w, script)
		return err
	}); err != nil {
		return "", err
	}
	out, err := command(ctx, "sbatch", append(append([]string{"--parsable"}, more...), path)...)
	if err != nil {
		return "", err
	}
	job, _, _ = strings.Cut(strings.TrimSpace(out), ";") // ID;cluster
	if _, err := strconv.Atoi(job); err != nil {
		return "", fmt.Errorf("sbatch answered %q, want the number of a job", out)
	}
	return job, nil
}

// command runs one of Slurm's programs.
func command(ctx context.Context, name string, args ...string) (string, error) {
	cmd := exec.CommandContext(ctx, name, args...)
	var out, wrong bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &wrong
	if err := cmd.Run(); err != nil {
		if errors.Is(err, exec.ErrNotFound) {
			return "", fmt.Errorf("%s is not on the PATH: is Slurm installed here?", name)
		}
		return "", fmt.Errorf("%s: %w: %s", name, err, strings.TrimSpace(wrong.String()))
	}
	return out.String(), nil
}

const submissionsName = "submitted.json"

// Submissions lists what was handed in for a sweep, oldest first.
func Submissions(dir string) ([]Submission, error) {
	path := filepath.Join(dir, slurmFolder, submissionsName)
	text, err := readFile(path, maxRecord)
	if errors.Is(err, os.ErrNotExist) {
		return nil, nil
	}
	if err != nil {
		return nil, err
	}
	var all []Submission
	if err := json.Unmarshal(text, &all); err != nil {
		return nil, fmt.Errorf("%s: damaged (%w); remove it if no job of this sweep is in the queue", path, err)
	}
	return all, nil
}

func writeSubmissions(ctx context.Context, dir string, all []Submission) error {
	text, err := json.MarshalIndent(all, "", " ")
	if err != nil {
		return err
	}
	return files.Write(ctx, filepath.Join(dir, slurmFolder, submissionsName), 0o666, func(w io.Writer) error {
		_, err := w.Write(append(text, '\n'))
		return err
	})
}

// Task is one task of a sweep in the queue.
type Task struct {
	Job   string `json:"job"`
	Chunk int    `json:"chunk"` // -1 for a merge
	Of    int    `json:"chunks"`
	State string `json:"state"` // squeue's word
}

// Queue asks squeue for the tasks of the sweep that wait or run.
func Queue(ctx context.Context, dir string) ([]Task, error) {
	all, err := Submissions(dir)
	if err != nil || len(all) == 0 {
		return nil, err
	}
	// all of one's own jobs: squeue --jobs fails for a job it has forgotten
	out, err := command(ctx, "squeue", "--noheader", "--array", "--me", "--format=%F %K %T")
	if err != nil {
		return nil, err
	}
	var tasks []Task
	for line := range strings.Lines(out) {
		fields := strings.Fields(line)
		if len(fields) != 3 {
			continue
		}
		for _, s := range all {
			switch fields[0] {
			case s.Job:
				if chunk, err := strconv.Atoi(fields[1]); err == nil {
					tasks = append(tasks, Task{s.Job, chunk, s.Chunks, fields[2]})
				}
			case s.Merge:
				tasks = append(tasks, Task{s.Merge, -1, 0, fields[2]})
			}
		}
	}
	return tasks, nil
}
