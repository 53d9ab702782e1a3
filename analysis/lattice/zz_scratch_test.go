package lattice_test
import ("testing";"context";"fmt";"time";"holdfast/analysis/lattice";"holdfast/deterministic";"holdfast/model")
func TestZZ(t *testing.T){
 for _,c:=range []float64{20,100,200}{
 d,err:=model.Load("../../testdata/designs/latch.toml"); if err!=nil{t.Fatal(err)}
 n,_:=d.Bind(c,nil)
 m,err:=deterministic.Survey(context.Background(),n,deterministic.Options{}); if err!=nil{t.Fatal(err)}
 p:=lattice.Problem{Network:n,Cores:m.Cores}
 for _,s:=range m.Stable(){p.States=append(p.States,lattice.Noise{Center:s.Molecules,Covariance:s.Covariance})}
 for _,mo:=range []bool{true,false}{ p.MeansOnly=mo
 t0:=time.Now(); s,err:=lattice.Solve(context.Background(),p); if err!=nil{t.Fatal(err)}
 fmt.Println(c,mo,time.Since(t0),s.States,s.Mean,s.Truncation,s.Escape,s.Relaxation,s.Box,s.Weight)
 }}
}
