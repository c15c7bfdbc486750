using MathNet.Numerics;
using MathNet.Numerics.Distributions;

namespace Pipeline.Statistics;

/// <summary>Chances of a statistic at least so large.</summary>
public static class Tail
{
    /// <summary>Beyond so many degrees of freedom Student's t is taken as normal: they differ by less than 1e-5.</summary>
    const double ManyDegrees = 1e5;

    /// <summary>P(|Z| &gt;= |z|) of a standard normal variable.</summary>
    public static double NormalTwoSided(double z) => SpecialFunctions.Erfc(Math.Abs(z) / Math.Sqrt(2));

    /// <summary>P(|T| &gt;= |t|) of Student's t; degrees of freedom need not be whole, infinity is normal.</summary>
    public static double StudentTwoSided(double t, double freedom) => freedom > ManyDegrees
        ? NormalTwoSided(t) : SpecialFunctions.BetaRegularized(0.5 * freedom, 0.5, freedom / (freedom + t * t));

    /// <summary>Quantile of Student's t at probability <paramref name="p"/>.</summary>
    public static double StudentQuantile(double p, double freedom) =>
        freedom > ManyDegrees ? Normal.InvCDF(0, 1, p) : StudentT.InvCDF(0, 1, freedom, p);

    /// <summary>P(X &gt;= x) of chi-square, accurate in the tail.</summary>
    public static double ChiSquare(double x, double freedom) => x <= 0 ? 1 : SpecialFunctions.GammaUpperRegularized(0.5 * freedom, 0.5 * x);

    /// <summary>P(X &gt;= x) of noncentral chi-square, as a Poisson mixture of central ones.</summary>
    /// <remarks>Terms are summed outward from the largest weight until they fall below 1e-15 of it.</remarks>
    public static double NoncentralChiSquare(double x, double freedom, double noncentrality)
    {
        if (noncentrality <= 0) return ChiSquare(x, freedom);
        double half = 0.5 * noncentrality, sum = 0;
        double Weight(int j) => Math.Exp(-half + j * Math.Log(half) - SpecialFunctions.GammaLn(j + 1));
        int peak = (int)half;
        for (int j = peak; j >= 0 && Weight(j) > 1e-15 * Weight(peak); j--) sum += Weight(j) * ChiSquare(x, freedom + 2 * j);
        for (int j = peak + 1; Weight(j) > 1e-15 * Weight(peak); j++) sum += Weight(j) * ChiSquare(x, freedom + 2 * j);
        return Math.Min(1, sum);
    }
}
