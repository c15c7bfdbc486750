namespace Pipeline.Statistics;

/// <summary>The likelihood-ratio statistic of Poisson counts.</summary>
/// <remarks>2 (mu - n + n ln(n/mu)), for n = 0: 2 mu. Same minimum as maximum likelihood, conserves the area, and serves as chi-square
/// of fit where mu is not small. Source: Baker and Cousins, Nucl. Instrum. Methods 221, 437 (1984).</remarks>
public static class PoissonDeviance
{
    /// <summary>Deviance of one bin.</summary>
    /// <param name="count">Observed, &gt;= 0; need not be whole where weights or equivalents are counted.</param>
    /// <param name="mean">Expected, positive.</param>
    public static double Of(double count, double mean)
    {
        if (count <= 0) return 2 * mean;
        double d = (mean - count) / count;
        // near the minimum the three terms cancel: d - ln(1 + d) = d^2/2 - d^3/3 + ...
        return Math.Abs(d) < 1e-4
            ? 2 * count * d * d * (0.5 - d * (1.0 / 3 - d * 0.25))
            : 2 * (mean - count + count * Math.Log(count / mean));
    }

    /// <summary>Signed root of the deviance, whose sum of squares is the deviance, and its derivative with respect to the mean.</summary>
    public static double Residual(double count, double mean, out double derivative)
    {
        double root = Math.Sqrt(Of(count, mean));
        double r = mean >= count ? root : -root;
        derivative = root < 1e-7 * Math.Sqrt(mean) ? 1 / Math.Sqrt(mean) : (1 - count / mean) / r;
        return r;
    }
}
