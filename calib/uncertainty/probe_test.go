package uncertainty
import ("testing";"fmt";"math";"time")
func ln(s Shape,u,dof float64) Line {return Line{U:u,Shape:s,DOF:dof,Sensitivity:1}}
func TestProbe(t *testing.T){
 show:=func(name string, p, want float64, l ...Line){ t0:=time.Now(); k:=ConvolutionFactor(l,p); fmt.Println(name,p,k,want,k-want,time.Since(t0))}
 for _,p:=range []float64{.5,.95,.99,.9973}{
 show("normal2",p,NormalFactor(p),ln(Normal,1,0),ln(Normal,2,0))
 show("four R",p,0,ln(Rectangular,1,0),ln(Rectangular,1,0),ln(Rectangular,1,0),ln(Rectangular,1,0))
 show("four R want .95",p,3.879406741348/2,ln(Rectangular,1,0),ln(Rectangular,1,0),ln(Rectangular,1,0),ln(Rectangular,1,0))
 show("T4",p,17.015814100/math.Sqrt(103),ln(Rectangular,1,0),ln(Rectangular,1,0),ln(Rectangular,1,0),ln(Rectangular,10,0))
 show("two R=tri",p,Triangular.factor(p,0),ln(Rectangular,1,0),ln(Rectangular,1,0))
 for _,tiny:=range []float64{1e-9,1e-6,1e-5,1e-4,1e-3}{
  show("arcsine+tiny",p,Arcsine.factor(p,0),ln(Arcsine,1,0),ln(Normal,tiny,0))
  show("rect+tiny",p,Rectangular.factor(p,0),ln(Rectangular,1,0),ln(Normal,tiny,0))
  show("tri+tiny",p,Triangular.factor(p,0),ln(Triangular,1,0),ln(Normal,tiny,0))
 }
 for _,beta:=range []float64{.001,.01,.1,.5,.9,.99,.9999} { trap:=(1-math.Sqrt((1-p)*(1-beta*beta)))/math.Sqrt((1+beta*beta)/6)
 show(fmt.Sprint("trap",beta), p, trap, ln(Rectangular,1+beta,0),ln(Rectangular,1-beta,0))}
 for _,nu:=range []float64{1,1.5,2,3,5.3,16.6,100,1e4,1e7}{
  show(fmt.Sprint("student+tiny ",nu),p,StudentFactor(p,nu),ln(Student,1,nu),ln(Normal,1e-6,0))
 }
 // Cauchy sums: scale adds
 show("2 cauchy",p,StudentFactor(p,1)*3/math.Sqrt(5),ln(Student,1,1),ln(Student,2,1))
 show("2 arcsine",p,0,ln(Arcsine,1,0),ln(Arcsine,1,0))
 show("S9",p,50.6170/math.Sqrt(1+2500./3+121./3),ln(Normal,1,0),ln(Rectangular,50/math.Sqrt(3),0),ln(Rectangular,11/math.Sqrt(3),0))
 }
}
