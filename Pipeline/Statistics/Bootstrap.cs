namespace Pipeline.Statistics;

/// <summary>Weights of a resampled set of units.</summary>
public static class Bootstrap
{
    /// <summary>Draws n - 1 of n units with replacement and weighs each draw n/(n - 1): the variance of a resampled mean is then the
    /// unbiased one, also for few units. A single unit keeps weight 1 and tells nothing of its scatter.</summary>
    /// <remarks>Source: Rao and Wu, J. Am. Stat. Assoc. 83, 231 (1988).</remarks>
    /// <param name="units">Number of units, positive.</param>
    /// <param name="random">Seeded stream.</param>
    /// <returns>[units] weights that sum to the number of units.</returns>
    public static double[] Weights(int units, Random random)
    {
        if (units < 1) throw new ArgumentOutOfRangeException(nameof(units), units, "must be positive");
        var weights = new double[units];
        if (units == 1) weights[0] = 1;
        else for (int k = 0; k < units - 1; k++) weights[random.Next(units)] += (double)units / (units - 1);
        return weights;
    }
}
