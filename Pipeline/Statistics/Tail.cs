using MathNet.Numerics;
namespace Pipeline.Statistics;
public static class Tail {
  public static double NormalTwoSided(double z) => SpecialFunctions.Erfc(Math.Abs(z)/Math.Sqrt(2));
  public static double ChiSquare(double x, double n) => x<=0?1:SpecialFunctions.GammaUpperRegularized(0.5*n,0.5*x);
  public static double NoncentralChiSquare(double x, double n, double lambda) { double s=0; for(int j=0;j<2000;j++){ double w=Math.Exp(-lambda/2+j*Math.Log(Math.Max(lambda,1e-300)/2)-SpecialFunctions.GammaLn(j+1)); s+=w*ChiSquare(x,n+2*j); if (j>lambda && w<1e-14) break;} return s; }
}
public static class MultipleComparisons { public static double[] Holm(double[] p) { int n=p.Length; int[] o=[..Enumerable.Range(0,n).OrderBy(i=>p[i])]; var a=new double[n]; double m=0; for(int k=0;k<n;k++){ m=Math.Max(m,Math.Min(1,(n-k)*p[o[k]])); a[o[k]]=m;} return a; } }
