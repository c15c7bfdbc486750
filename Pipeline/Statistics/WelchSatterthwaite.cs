namespace Pipeline.Statistics;

/// <summary>Degrees of freedom of a variance that is a sum of estimated ones.</summary>
/// <remarks>(sum v)^2 / sum (v^2/nu). Source: JCGM 100:2008 (GUM), equation G.2b.</remarks>
public static class WelchSatterthwaite
{
    /// <param name="parts">Variance and degrees of freedom of each part; infinite where it is known.</param>
    /// <returns>At least 1; infinite where every part is known.</returns>
    public static double EffectiveFreedom(params ReadOnlySpan<(double Variance, double Freedom)> parts)
    {
        (double sum, double squares) = (0, 0);
        foreach ((double variance, double freedom) in parts)
        {
            sum += variance;
            if (!double.IsInfinity(freedom)) squares += variance * variance / Math.Max(freedom, 1e-9);
        }
        return squares > 0 ? Math.Max(1, sum * sum / squares) : double.PositiveInfinity;
    }
}
