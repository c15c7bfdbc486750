using MathNet.Numerics.Distributions;
using Pipeline.Quantities;

namespace Pipeline.Statistics;

/// <summary>Interval for a signal on a background that is known within an error.</summary>
/// <remarks>Profile likelihood of n ~ Poisson(s + b), b0 ~ Normal(b, sigma): all s &gt;= 0 whose deviance is within the quantile of
/// chi-square with one degree of freedom of the smallest; the lower end is 0 where that is reached. After Rolke, Lopez, Conrad, Nucl.
/// Instrum. Methods A 551, 493 (2005).</remarks>
public static class SignalInterval
{
    /// <param name="counts">n, &gt;= 0; weighted counts need not be whole.</param>
    /// <param name="background">b0.</param>
    /// <param name="backgroundError">Standard error of the background, &gt;= 0.</param>
    /// <param name="confidence">In (0, 1).</param>
    /// <returns>Interval of s, in counts.</returns>
    public static Interval Profile(double counts, double background, double backgroundError, double confidence)
    {
        if (!(counts >= 0)) throw new ArgumentOutOfRangeException(nameof(counts), counts, "must be >= 0");
        if (!(backgroundError >= 0)) throw new ArgumentOutOfRangeException(nameof(backgroundError), backgroundError, "must be >= 0");
        double Deviance(double s) => ProfiledDeviance(s, counts, background, backgroundError);
        double rise = ChiSquared.InvCDF(1, confidence), best = Math.Max(0, counts - background), least = Deviance(best);
        double step = Math.Sqrt(Math.Max(counts, 1)) + backgroundError + 1, high = best + step;
        while (Deviance(high) - least < rise) high += step;
        double upper = Bisect(s => Deviance(s) - least - rise, best, high);
        double lower = best > 0 && Deviance(0) - least > rise ? -Bisect(s => Deviance(-s) - least - rise, -best, 0) : 0;
        return new Interval(lower, upper, confidence);
    }

    /// <summary>Smallest over b of the deviance, which has a closed form.</summary>
    static double ProfiledDeviance(double s, double n, double b0, double sigma)
    {
        if (sigma == 0) return PoissonDeviance.Of(n, Math.Max(s + b0, 1e-12));
        // d/db of 2(s + b) - 2 n ln(s + b) + (b - b0)^2/sigma^2 = 0 is a quadratic in m = s + b
        double variance = sigma * sigma, p = s + b0 - variance, m = 0.5 * (p + Math.Sqrt(p * p + 4 * variance * n)), b = m - s;
        if (b < 0) (b, m) = (0, s);
        return PoissonDeviance.Of(n, Math.Max(m, 1e-12)) + (b - b0) * (b - b0) / variance;
    }

    /// <summary>Root of a function that rises from a negative value at <paramref name="low"/>.</summary>
    static double Bisect(Func<double, double> f, double low, double high)
    {
        for (int k = 0; k < 200 && high - low > 1e-12 * (Math.Abs(high) + Math.Abs(low)); k++)
        {
            double middle = 0.5 * (low + high);
            if (f(middle) < 0) low = middle;
            else high = middle;
        }
        return 0.5 * (low + high);
    }
}
