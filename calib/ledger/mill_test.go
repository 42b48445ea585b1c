package ledger
import ("testing";"os";"time";"syscall";"fmt")
func cpu() time.Duration { var r syscall.Rusage; syscall.Getrusage(0,&r); return time.Duration(r.Utime.Nano()+r.Stime.Nano()) }
func BenchmarkMill(b *testing.B) {
	_, err := os.Stat("/tmp/try/mill/log")
	s := open(b, "/tmp/try/mill/log")
	if err != nil { t:=time.Now(); generate(b, s, 1000000); fmt.Println("gen", time.Since(t)) }
	for k := range 3 {
	t := time.Now(); c := cpu()
	for i := range 20 { l, err := s.List(background, Filter{Serial: fmt.Sprintf("D-%04d", k*100+1+i*37%9999)}); must(b, err); if len(l) != 100 {b.Fatal(len(l))} }
	fmt.Println("list", time.Since(t)/20, (cpu()-c)/20)
	}
	t, c := time.Now(), cpu()
	r, err := s.Check(background); must(b, err)
	d := time.Since(t)
	fmt.Println("check", r.Entries, d, float64(r.Entries)/d.Seconds(), "cpu per entry", (cpu()-c)/time.Duration(r.Entries))
	var ru syscall.Rusage; syscall.Getrusage(0,&ru); fmt.Println("maxrss kB", ru.Maxrss)
}
